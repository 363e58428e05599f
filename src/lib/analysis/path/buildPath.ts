import type { Warning } from '../../schemas/analysisDocument.ts';
import { toLocalMetres } from '../channels/localFrame.ts';
import { findMarks } from '../laps/findMarks.ts';
import type { LapMarks, StartLine } from '../laps/lapMarks.ts';
import type { Channels, Lap, PlacedRun, ReferencePath } from '../model.ts';
import { median, quantile } from '../stats/quantile.ts';
import { sampleBefore } from '../trace/placeTime.ts';
import { closedLine, smoothingFor, within } from './closedLine.ts';
import type { Stretch } from './closedLine.ts';
import { cubicBetween, curvatureOf, fitEvenLine } from './evenLine.ts';
import type { EvenLine } from './evenLine.ts';
import { freshPositions } from './freshPositions.ts';
import type { Positions } from './freshPositions.ts';
import type { LineSegment } from './lineSegment.ts';
import { measureLap, pathFromMotion } from './pathFromMotion.ts';
import { geometryOfLine } from './pathGeometry.ts';
import { placeRun } from './placeRun.ts';
import { distanceAt } from './stretchPlace.ts';
import { trackDistanceByPlace, trackLength } from './trackDistance.ts';
import { trackOnPath } from './trackOnPath.ts';
import { wayAlong } from './wayAlong.ts';

export interface BuildPathOptions {
	/** a start/finish line that a person gave */
	line?: LineSegment;
}

/** Up to this noise of the positions one lap's line is drawn as it was driven; above, laps are averaged. */
const SHARP_NOISE_M = 0.02;
/** More laps than this make the line no better. */
const MOST_LAPS = 8;
/** A lap may stand for the path when its length is this near to the usual one, and its time to the best quarter's. */
const LENGTH_SHARE = 0.02;
const SLOW_SHARE = 1.07;
const LONGEST_GAP_S = 0.5;
const STOP_KMH = 3.6;

/**
 * Draws the path of a run and cuts the run into laps on it.
 *
 * From positions the path is the line of the fastest undisturbed lap, or with noisy positions the mean line of up to eight such laps.
 * Without positions it is drawn from lateral acceleration, yaw rate or steering; with speed alone it has a length and no shape
 * (x runs along it, y is 0, curvature unknown). Without a full lap the path is open: the whole run.
 *
 * @returns the path, the run laid on it with its laps, and what is to be said about it
 */
export function buildPath(
	channels: Channels,
	options: BuildPathOptions = {}
): { path: ReferencePath; placed: PlacedRun; laps: Lap[]; warnings: Warning[] } {
	const positions = freshPositions(channels);
	const given = options.line ? lineFromSegment(options.line, channels) : null;
	const marks = findMarks(channels, positions, given);
	const laps = undisturbed(channels, marks);
	const path = positions ? fromPositions(channels, positions, marks, laps) : withoutPositions(channels, marks, laps);
	const { placed, warnings } = placeRun(channels, path, { known: { positions, marks } });
	const said: Warning[] = [...marks.warnings, ...warnings];
	if (path.origin === 'latAcc' || path.origin === 'yawRate' || path.origin === 'steering') {
		const from = { latAcc: 'lateral acceleration', yawRate: 'yaw rate', steering: 'steering' }[path.origin];
		said.push({
			code: 'path_from_accelerations',
			message: `the file has no positions: the plan was drawn from ${from} and speed`,
			row: null
		});
	}
	return { path, placed, laps: placed.laps, warnings: said };
}

/** Full laps that may stand for the path, fastest first; with none undisturbed, all full ones. */
function undisturbed(channels: Channels, { crossingS }: LapMarks): Stretch[] {
	const { timeS, speedKmh } = channels;
	const all: Stretch[] = [];
	for (let k = 0; k + 1 < crossingS.length; k++) all.push({ startS: crossingS[k], endS: crossingS[k + 1] });
	const length = (lap: Stretch) => distanceAt(channels, lap.endS) - distanceAt(channels, lap.startS);
	const time = (lap: Stretch) => lap.endS - lap.startS;
	const usualM = median(all.map(length));
	const quickS = quantile(all.map(time), 0.25);
	const good = all.filter((lap) => {
		if (Math.abs(length(lap) / usualM - 1) > LENGTH_SHARE || time(lap) > SLOW_SHARE * quickS) return false;
		const from = Math.max(sampleBefore(timeS, lap.startS), 0);
		const to = Math.min(sampleBefore(timeS, lap.endS) + 1, timeS.length - 1);
		for (let i = from + 1; i <= to; i++) {
			if (timeS[i] - timeS[i - 1] > LONGEST_GAP_S || !(speedKmh[i] >= STOP_KMH)) return false;
		}
		return true;
	});
	return (good.length > 0 ? good : all).sort((a, b) => time(a) - time(b));
}

function fromPositions(channels: Channels, positions: Positions, marks: LapMarks, laps: Stretch[]): ReferencePath {
	const chosen = laps.slice(0, positions.noiseM > SHARP_NOISE_M ? MOST_LAPS : 1);
	const line = chosen.length > 0 ? closedLine(positions, channels, chosen) : openLine(positions, channels);
	const curvature = curvatureOf(line);
	const own = chosen.length > 0 ? within(positions, channels, chosen[0], 0) : positions;
	const tracked = trackOnPath(own, channels, geometryOfLine(line, curvature));
	const trackM = chosen.length > 0 && positions.noiseM <= SHARP_NOISE_M ? trackLength(channels, marks) : null;
	return {
		...atWholeMetres(line, curvature),
		trackDistanceM:
			trackM === null ? null : trackDistanceByPlace(channels, own.sample, tracked.placeM, line.lengthM, trackM),
		origin: 'positions',
		line: lineKind(marks),
		speedKmh: speedByPlace(channels, own.sample, tracked.placeM, line.lengthM, line.closed),
		frame: channels.origin
	};
}

function openLine(positions: Positions, channels: Channels): EvenLine {
	const atM = wayAlong(positions, channels);
	const lengthM = Math.max(atM[atM.length - 1], 8);
	const { xM, yM, noiseM } = positions;
	return fitEvenLine({ atM, xM, yM, weights: null, lengthM, closed: false }, smoothingFor(noiseM));
}

function atWholeMetres(
	line: EvenLine,
	curvature: Float64Array
): Pick<ReferencePath, 'lengthM' | 'closed' | 'xM' | 'yM' | 'curvaturePerM'> {
	const { lengthM, closed, stepM } = line;
	const count = Math.floor(lengthM) + 1;
	const at = (values: Float64Array) =>
		Float64Array.from({ length: count }, (_, s) => {
			const u = s / stepM;
			const i = Math.floor(u);
			return cubicBetween(values, i, u - i, closed);
		});
	return { lengthM, closed, xM: at(line.xM), yM: at(line.yM), curvaturePerM: at(curvature) };
}

/** Speed at whole metres from samples with places, which may be any of several laps long. */
function speedByPlace(
	{ speedKmh }: Channels,
	sample: Int32Array,
	placeM: Float64Array,
	lengthM: number,
	closed: boolean
): Float64Array {
	const count = Math.floor(lengthM) + 1;
	const out = new Float64Array(count).fill(NaN);
	let last = -1;
	for (let j = 0; j < sample.length; j++) {
		if (!Number.isFinite(placeM[j]) || Number.isNaN(speedKmh[sample[j]])) continue;
		if (last >= 0 && placeM[j] > placeM[last]) {
			for (let s = Math.ceil(placeM[last]); s <= placeM[j]; s++) {
				const share = (s - placeM[last]) / (placeM[j] - placeM[last]);
				const at = closed ? ((s % count) + count) % count : s;
				if (at < 0 || at >= count) continue;
				out[at] = speedKmh[sample[last]] + share * (speedKmh[sample[j]] - speedKmh[sample[last]]);
			}
		}
		last = j;
	}
	for (let s = 0; s < count; s++) if (Number.isNaN(out[s])) out[s] = out[s > 0 ? s - 1 : count - 1];
	for (let s = count - 1; s >= 0; s--) if (Number.isNaN(out[s])) out[s] = out[s < count - 1 ? s + 1 : 0];
	return out;
}

function withoutPositions(channels: Channels, marks: LapMarks, laps: Stretch[]): ReferencePath {
	const { timeS } = channels;
	const closed = laps.length > 0;
	const last = timeS.length - 1;
	const base = laps[0] ?? { startS: timeS[0], endS: timeS[last] };
	const wayOf = (lap: Stretch) => [distanceAt(channels, lap.startS), distanceAt(channels, lap.endS)] as const;
	const [startM, endM] = wayOf(base);
	const lengthM = Math.max(endM - startM, 8);
	const measured = (closed ? laps.slice(0, MOST_LAPS) : [base]).map((lap) =>
		measureLap(channels, lap.startS, lap.endS, ...wayOf(lap), lengthM)
	);
	const plan = pathFromMotion(channels, measured, lengthM, closed);
	const count = Math.floor(lengthM) + 1;
	const [first] = measured;
	const sample = Int32Array.from({ length: first.placeM.length }, (_, k) => first.from + k);
	return {
		lengthM,
		closed,
		xM: plan?.xM ?? Float64Array.from({ length: count }, (_, s) => s),
		yM: plan?.yM ?? new Float64Array(count),
		curvaturePerM: plan?.curvaturePerM ?? new Float64Array(count).fill(NaN),
		origin: plan?.origin ?? 'speedOnly',
		line: lineKind(marks),
		speedKmh: speedByPlace(channels, sample, first.placeM, lengthM, closed),
		frame: null
	};
}

function lineKind({ source }: LapMarks): ReferencePath['line'] {
	return source === 'chosenLine' || source === 'lapLength' || source === 'none' ? 'chosen' : 'mark';
}

/** A given line in the run's local metres; null where the run has no geographic positions. */
function lineFromSegment(segment: LineSegment, { origin }: Channels): StartLine | null {
	if (!origin) return null;
	const { xM, yM } = toLocalMetres(
		[segment.latitudeA, segment.latitudeB],
		[segment.longitudeA, segment.longitudeB],
		origin
	);
	const reach = Math.hypot(xM[1] - xM[0], yM[1] - yM[0]) / 2;
	return {
		xM: (xM[0] + xM[1]) / 2,
		yM: (yM[0] + yM[1]) / 2,
		headingRad: Math.atan2(yM[1] - yM[0], xM[1] - xM[0]) - Math.PI / 2,
		leftM: reach,
		rightM: reach
	};
}
