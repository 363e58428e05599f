import type { Warning } from '../../schemas/analysisDocument.ts';
import { KerbnoteError } from '../../schemas/kerbnoteError.ts';
import { findMarks } from '../laps/findMarks.ts';
import { judgeLaps } from '../laps/judgeLaps.ts';
import type { LapMarks } from '../laps/lapMarks.ts';
import { listLaps } from '../laps/listLaps.ts';
import type { Channels, PlacedRun, ReferencePath } from '../model.ts';
import { median } from '../stats/quantile.ts';
import { placedEnds } from '../trace/placeTime.ts';
import { alignPositions } from './alignPositions.ts';
import { anchorPlace } from './anchorPlace.ts';
import { changeFrame } from './changeFrame.ts';
import { freshPositions } from './freshPositions.ts';
import type { Positions } from './freshPositions.ts';
import { fusePlace } from './fusePlace.ts';
import { bendReader, curvatureFromMotion, curvatureFromPositions, steeringScaleFor } from './ownCurvature.ts';
import { geometryOfPath } from './pathGeometry.ts';
import { distanceAt, stretchPlace } from './stretchPlace.ts';
import { placeByTrackDistance } from './trackDistance.ts';
import { trackOnPath } from './trackOnPath.ts';

/** A run is on a path when it is found near it over this share of its way. */
const LEAST_ON_PATH = 0.5;
/** Without positions, when its laps are as long as the path but for this share: the scale of a speed sensor. */
const LARGEST_LENGTH_DIFFERENCE = 0.06;

export interface PlaceRunOptions {
	/** what is already known of the run, so that it is not worked out twice */
	known?: { positions: Positions | null; marks: LapMarks };
}

/**
 * Lays a run on a path: every sample gets an unwrapped place, turn · L + s, and its distance from the path; laps are cut where the
 * place passes whole turns, and judged.
 *
 * With positions the samples are dropped on the path; without, places go by distance between the run's lap marks, stretched between
 * matched speed minima. Where the file's own crossings are finely known and lie on the path's line, places are pinned to them.
 *
 * @param path the run's own, or a known layout's
 * @returns the placed run and what is to be said about it
 * @throws {KerbnoteError} `reference_mismatch` where the run is not on this path, or goes round the other way
 */
export function placeRun(
	channels: Channels,
	path: ReferencePath,
	options: PlaceRunOptions = {}
): { placed: PlacedRun; warnings: Warning[] } {
	const inFrame = options.known ? channels : framed(channels, path);
	const positions = options.known ? options.known.positions : freshPositions(inFrame);
	const marks = options.known?.marks ?? findMarks(inFrame, positions, null);
	const usable = positions !== null && path.origin === 'positions';
	// a run that made the path belongs on it, even if it hardly moves
	const laid =
		(usable ? byPositions(inFrame, positions, path, marks, options.known !== undefined) : null) ??
		byDistance(inFrame, path, marks, options.known !== undefined);
	countFromFirstTurn(laid.placeM, path);
	const unjudged: PlacedRun = { ...laid, channels: inFrame, path, laps: [] };
	unjudged.laps = listLaps(unjudged, marks);
	const placed = { ...unjudged, laps: judgeLaps(unjudged) };
	return { placed, warnings: lapWarnings(placed) };
}

type Laid = Pick<PlacedRun, 'placeM' | 'offsetM' | 'curvaturePerM'>;

/** @returns null where the path's own run cannot be followed along it */
function byPositions(
	channels: Channels,
	positions: Positions,
	path: ReferencePath,
	marks: LapMarks,
	isOwn: boolean
): Laid | null {
	const geometry = geometryOfPath(path);
	let tracked = trackOnPath(positions, channels, geometry);
	if (tracked.reversed || !(tracked.onPath >= LEAST_ON_PATH)) {
		if (isOwn) return null;
		throw tracked.reversed
			? mismatch('goes round the other way', 'Choose a reference driven in the same direction')
			: notHere();
	}
	let moved = positions;
	const shift = alignPositions(tracked, geometry);
	if (shift) {
		moved = shifted(positions, shift.xM, shift.yM);
		tracked = trackOnPath(moved, channels, geometry);
	}
	const dense = fusePlace(moved, channels, tracked, geometry);
	placeByTrackDistance(dense.placeM, channels, path, marks);
	anchorPlace(dense.placeM, channels, path.lengthM, marks);
	return {
		placeM: dense.placeM,
		offsetM: dense.offsetM,
		curvaturePerM: curvatureFromPositions(positions, channels)
	};
}

function byDistance(channels: Channels, path: ReferencePath, marks: LapMarks, isOwn: boolean): Laid {
	const ways = Array.from(marks.crossingS, (t) => distanceAt(channels, t));
	const usual = median(ways.slice(1).map((way, k) => way - ways[k]));
	if (!isOwn && Math.abs(usual / path.lengthM - 1) > LARGEST_LENGTH_DIFFERENCE) throw notHere();
	const placeM = stretchPlace(channels, marks, path);
	placeByTrackDistance(placeM, channels, path, marks);
	const reader = bendReader(channels, path.origin, steeringScaleFor(channels, placeM, path));
	return { placeM, offsetM: null, curvaturePerM: reader && curvatureFromMotion(channels, reader) };
}

/** Channels with their positions in the path's frame. */
function framed(channels: Channels, path: ReferencePath): Channels {
	const { xM, yM, origin } = channels;
	if (!xM || !yM || path.origin !== 'positions') return channels;
	if ((origin === null) !== (path.frame === null)) return { ...channels, xM: null, yM: null, origin: null };
	if (!origin || !path.frame) return channels;
	const same = origin.latitudeDeg === path.frame.latitudeDeg && origin.longitudeDeg === path.frame.longitudeDeg;
	if (same) return channels;
	return { ...channels, ...changeFrame(xM, yM, origin, path.frame), origin: path.frame };
}

function shifted(positions: Positions, byX: number, byY: number): Positions {
	return { ...positions, xM: positions.xM.map((x) => x + byX), yM: positions.yM.map((y) => y + byY) };
}

/** Counts places, in place, so that the first passage of the line is at 0. */
function countFromFirstTurn(placeM: Float64Array, { lengthM, closed }: ReferencePath): void {
	const { first, last } = placedEnds(placeM);
	if (!closed || first > last) return;
	const step = 1.6 * (placeM[Math.min(first + 1, last)] - placeM[first]);
	const turnM = Math.ceil((placeM[first] - step) / lengthM) * lengthM;
	if (turnM !== 0) for (let i = 0; i < placeM.length; i++) placeM[i] -= turnM;
}

function lapWarnings({ laps, path }: PlacedRun): Warning[] {
	const timed = laps.filter((lap) => lap.kind === 'timed');
	if (timed.length === 0) {
		return [{ code: 'no_complete_lap', message: 'the recording holds no complete lap', row: null }];
	}
	const warnings: Warning[] = [];
	if (!timed.some((lap) => lap.clean)) {
		warnings.push({ code: 'no_clean_lap', message: 'no lap is clean; the fastest timed one stands in', row: null });
	}
	if (timed.some((lap) => lap.reasons.includes('time_coarse'))) {
		const plusMinusMs = Math.round(Math.max(...timed.map((lap) => lap.plusMinusS)) * 1000);
		warnings.push({
			code: 'lap_time_from_samples',
			message: `lap times are known to ±${plusMinusMs} ms, because the file only says at which sample a lap begins`,
			row: null
		});
	}
	if (path.origin === 'speedOnly') {
		warnings.push({
			code: 'speed_only',
			message: 'the file has nothing that turns: corners were found from speed alone',
			row: null
		});
	}
	return warnings;
}

function notHere(): KerbnoteError {
	return mismatch('does not follow this path', 'Choose a reference from the same circuit and layout');
}

function mismatch(what: string, remedy: string): KerbnoteError {
	return new KerbnoteError('reference_mismatch', `a run on this layout must follow its path, this run ${what}`, remedy);
}
