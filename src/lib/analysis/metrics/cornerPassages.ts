import type { Corner } from '../../schemas/analysisDocument.ts';
import type { Lap, PlacedRun } from '../model.ts';
import { placedEnds, placeAtTime, timeAtPlace } from '../trace/placeTime.ts';
import type { BrakeApplication } from './brakeApplications.ts';

/** One driving through one corner, in the run's own time. Times are NaN where the recording does not hold them. */
export interface CornerPassage {
	corner: Corner & { number: number };
	/** place of the lap's line: what is taken off an unwrapped place so that it counts from start/finish */
	baseM: number;
	startM: number;
	apexM: number;
	endM: number;
	startS: number;
	apexS: number;
	endS: number;
	/** the timed lap in which its apex lies; null in out laps and beyond */
	lap: Lap | null;
	/** the brakings for this corner, in order; empty for none */
	brakings: BrakeApplication[];
	/** touches of the pedal beside them, too weak to be measured */
	touches: number;
	/** how long until the start of the next corner; infinite for the last */
	toNextS: number;
}

/** Under this impulse a touch of the pedal is not a braking for a corner: 10 % for 0.03 s. */
const LEAST_IMPULSE_PCT_S = 0.3;
const TOUCH_SHARE = 0.2;
/** Full throttle for longer than this between a braking and the corner: it was not for the corner. */
const FULL_THROTTLE_BETWEEN_S = 0.7;
const FULL_THROTTLE_PCT = 95;
/** A braking within a corner and behind its apex still belongs to it when the next corner is farther than this. */
const FAR_FROM_NEXT_S = 2;

/**
 * Every passage of a numbered corner in a run, in the order of driving, each with the brakings that belong to it.
 *
 * A braking belongs to the first corner whose apex comes after half of its impulse: a stop trailed past an apex stays with that
 * corner, one that begins in a flat-out bend goes to the corner behind. Behind the apex, but in the corner and far from the next, it
 * stays. A corner may have several; one with full throttle for over 0.7 s between it and the corner is left out, and one of under a fifth
 * of the strongest's impulse is a touch.
 *
 * @param placed  the run
 * @param corners the corner map; kinks (number null) have no passages
 * @param applications every braking of the run, in order
 */
export function cornerPassages(
	placed: PlacedRun,
	corners: Corner[],
	applications: BrakeApplication[]
): CornerPassage[] {
	const passages = listPassages(placed, corners);
	const candidates = new Map<CornerPassage, BrakeApplication[]>();
	let next = 0;
	for (const application of applications) {
		if (application.impulsePctS < LEAST_IMPULSE_PCT_S) continue;
		const halfM = placeAtTime(placed, application.halfImpulseS);
		if (Number.isNaN(halfM)) continue;
		while (next < passages.length && passages[next].apexM < halfM) next++;
		const before = passages[next - 1];
		const stays = before && halfM < before.endM && before.toNextS >= FAR_FROM_NEXT_S;
		const owner = stays ? before : passages[next];
		if (!owner) continue;
		const held = candidates.get(owner);
		if (held) held.push(application);
		else candidates.set(owner, [application]);
	}
	for (const [passage, held] of candidates) choose(placed, passage, held);
	return passages;
}

function listPassages(placed: PlacedRun, corners: Corner[]): CornerPassage[] {
	const { placeM, path } = placed;
	const { first, last } = placedEnds(placeM);
	if (first > last) return [];
	const lengthM = path.lengthM;
	const lapOfTurn = new Map<number, Lap>();
	for (const lap of placed.laps) {
		if (lap.kind !== 'timed') continue;
		lapOfTurn.set(lap.turn ?? Math.round(placeAtTime(placed, lap.startS) / lengthM), lap);
	}
	const numbered = corners
		.filter((corner): corner is Corner & { number: number } => corner.number !== null)
		.sort((a, b) => a.apexM - b.apexM);
	const passages: CornerPassage[] = [];
	const turns = path.closed ? [Math.floor(placeM[first] / lengthM), Math.floor(placeM[last] / lengthM)] : [0, 0];
	for (let turn = turns[0]; turn <= turns[1]; turn++) {
		const baseM = turn * lengthM;
		for (const corner of numbered) {
			const apexM = baseM + corner.apexM;
			const startM = baseM + corner.startM - (corner.startM > corner.apexM ? lengthM : 0);
			const endM = baseM + corner.endM + (corner.endM < corner.apexM ? lengthM : 0);
			if (endM < placeM[first] || startM > placeM[last]) continue;
			passages.push({
				corner,
				baseM,
				startM,
				apexM,
				endM,
				startS: timeAtPlace(placed, startM),
				apexS: timeAtPlace(placed, apexM),
				endS: timeAtPlace(placed, endM),
				lap: lapOfTurn.get(turn) ?? null,
				brakings: [],
				touches: 0,
				toNextS: Infinity
			});
		}
	}
	passages.forEach((passage, i) => {
		const following = passages[i + 1];
		if (following) passage.toNextS = Math.max(0, following.startS - passage.endS);
	});
	return passages;
}

function choose(placed: PlacedRun, passage: CornerPassage, held: BrakeApplication[]): void {
	const { timeS, throttlePct } = placed.channels;
	const fits = held.filter((application) => {
		if (!throttlePct) return true;
		let fullS = 0;
		for (let i = application.offIndex; i + 1 < timeS.length && timeS[i + 1] < passage.startS; i++) {
			if (throttlePct[i] >= FULL_THROTTLE_PCT && throttlePct[i + 1] >= FULL_THROTTLE_PCT)
				fullS += timeS[i + 1] - timeS[i];
		}
		return fullS <= FULL_THROTTLE_BETWEEN_S;
	});
	const strongest = fits.reduce((most, one) => Math.max(most, one.impulsePctS), 0);
	passage.brakings = fits.filter((one) => one.impulsePctS >= TOUCH_SHARE * strongest);
	passage.touches = fits.length - passage.brakings.length;
}
