import type { StintLap, StintLapReason } from '../../schemas/stintDocument.ts';
import { quantile } from '../stats/quantile.ts';
import { robustStintLine, type StintLine } from './robustStintLine.ts';

/** A lap of a stint before it is judged. */
export interface RawStintLap {
	number: number;
	/** NaN where there is none */
	timeS: number;
	/** what the file itself says of it, null where nothing */
	marked: StintLapReason | null;
}

/** A lap slower than this times the lower quartile is no racing lap (domain: clean). */
const SLOWEST = 1.07;
/** Laps at the end that climb above the line together, at least this many, are a cliff and not traffic. */
const LEAST_CLIFF = 3;
/** A lap this much quicker than the line was cut or not whole. */
const QUICKEST = 0.97;

/**
 * Says of each lap whether it speaks for the pace: whole, unmarked, at most 107 % of the lower quartile, and no slower than the robust line
 * + max(3 robust s.d., 0.3 %).
 */
export function chooseLaps(laps: readonly RawStintLap[]): StintLap[] {
	const judged = laps.map(({ number, timeS, marked }): StintLap => {
		const known = Number.isFinite(timeS) && timeS > 0;
		const reason = known ? marked : 'no_time';
		return { number, timeS: known ? timeS : null, representative: reason === null, reason };
	});
	const open = () => judged.filter((lap) => lap.reason === null);
	const quartile = quantile(
		open().map((lap) => lap.timeS ?? NaN),
		0.25
	);
	for (const lap of open()) if ((lap.timeS ?? 0) > SLOWEST * quartile) leaveOut(lap, 'slow');
	const candidates = open();
	const line = robustStintLine(
		candidates.map((lap) => lap.number),
		candidates.map((lap) => lap.timeS ?? NaN)
	);
	if (line && candidates.length >= 4) judgeByLine(candidates, line);
	nameSlowOnes(judged);
	return judged;
}

function leaveOut(lap: StintLap, reason: StintLapReason): void {
	lap.representative = false;
	lap.reason = reason;
}

function judgeByLine(laps: StintLap[], line: StintLine): void {
	const above = (lap: StintLap) => (lap.timeS ?? 0) - line.intercept - line.slope * lap.number;
	const cliff = new Set(cliffOf(laps, above, line));
	for (const lap of laps) {
		if (above(lap) > line.marginS && !cliff.has(lap)) leaveOut(lap, 'slow');
		else if ((lap.timeS ?? 0) < QUICKEST * (line.intercept + line.slope * lap.number)) leaveOut(lap, 'too_quick');
	}
}

/**
 * The last laps, where they leave the line together and climb: tyres that let go. Traffic comes and goes, so that a lap back on the line
 * ends the search.
 */
function cliffOf(laps: StintLap[], above: (lap: StintLap) => number, line: StintLine): StintLap[] {
	let from = laps.length;
	while (from > 0 && above(laps[from - 1]) > line.marginS) from--;
	const tail = laps.slice(from);
	if (tail.length < LEAST_CLIFF) return [];
	const tailLine = robustStintLine(
		tail.map((lap) => lap.number),
		tail.map((lap) => lap.timeS ?? NaN)
	);
	if (!tailLine || tailLine.slope <= line.slope) return [];
	const spread = Math.max(3 * line.sd, 0.5 * line.marginS);
	const close = tail.filter(
		(lap) => Math.abs((lap.timeS ?? 0) - tailLine.intercept - tailLine.slope * lap.number) <= 2 * spread
	);
	const climbs = (tail.at(-1)?.timeS ?? 0) - (tail[0].timeS ?? 0) > line.marginS;
	return climbs && close.length === tail.length ? tail : [];
}

/** The first and last slow laps get the name of what they most likely are. */
function nameSlowOnes(laps: StintLap[]): void {
	const firstGood = laps.findIndex((lap) => lap.representative);
	const lastGood = laps.findLastIndex((lap) => lap.representative);
	if (firstGood < 0) return;
	laps.forEach((lap, i) => {
		if (lap.reason !== 'slow') return;
		if (i === 0 && firstGood > 0) lap.reason = 'out_lap';
		else if (i < firstGood) lap.reason = 'warm_up';
		else if (i === laps.length - 1 && i > lastGood) lap.reason = 'in_lap';
		else if (isPhase(laps, i)) lap.reason = 'neutralised';
	});
}

/** Two or more in a row, each over 107 % of the laps around: not one driver's traffic. */
function isPhase(laps: readonly StintLap[], i: number): boolean {
	const usual = quantile(
		laps.filter((lap) => lap.representative).map((lap) => lap.timeS ?? NaN),
		0.5
	);
	const crawls = (lap: StintLap | undefined) => lap?.reason !== null && (lap?.timeS ?? 0) > SLOWEST * usual;
	return crawls(laps[i]) && (crawls(laps[i - 1]) || crawls(laps[i + 1]));
}
