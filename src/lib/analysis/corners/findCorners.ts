import type { Corner } from '../../schemas/analysisDocument.ts';
import type { PlacedRun } from '../model.ts';
import { findBends, isCornering } from './bends.ts';
import type { Bend } from './bends.ts';
import { longestFullThrottle, pedalUse, slowingAt } from './pedalUse.ts';
import { referenceTrace } from './referenceTrace.ts';
import type { ReferenceTrace } from './referenceTrace.ts';
import { speedCorners } from './speedCorners.ts';

/** A corner turns at least this much; what turns less is a straight with a wobble. */
const LEAST_ANGLE_RAD = (15 * Math.PI) / 180;
/** Brake and lift for a corner are looked for this far before it, but not before the last one's apex. */
const APPROACH_M = 250;
/** Linked: less time than this from end to start, and no longer at full throttle between than this. */
const LINKED_S = 2;
const LINKED_FULL_S = 0.7;

/**
 * Finds the corners of a layout from the path's curvature, and the kinks (number null): bends that turn at least 15° but are
 * neither tighter than 300 m, nor use 40 % of the car's lateral envelope, nor are braked or lifted for. Braking, throttle and speed
 * are those of the reference lap. Corners are numbered by apex from the line; one that lies across the line has startM > endM.
 *
 * Where the path has no shape, corners are the minima of speed, without direction.
 *
 * @param placed the run that the path was made from, or any run laid on it
 * @returns in order of apex; empty where the run has no lap on the path
 */
export function findCorners(placed: PlacedRun): Corner[] {
	const trace = referenceTrace(placed);
	if (!trace) return [];
	const bends = placed.path.origin === 'speedOnly' ? speedCorners(trace) : curvedCorners(trace);
	return numbered(bends, trace);
}

/** A corner or kink in places of the unrolled trace. */
export interface FoundCorner {
	startM: number;
	apexM: number;
	apex2M: number | null;
	endM: number;
	direction: Corner['direction'];
	minRadiusM: number | null;
	angleDeg: number | null;
	kind: Corner['kind'];
	isCorner: boolean;
}

function curvedCorners(trace: ReferenceTrace): FoundCorner[] {
	const found: FoundCorner[] = [];
	let lastApexM = -Infinity;
	for (const bend of findBends(trace)) {
		if (bend.angleRad < LEAST_ANGLE_RAD) continue;
		const corner = judged(bend, lastApexM, trace);
		if (corner.isCorner) lastApexM = corner.apex2M ?? corner.apexM;
		found.push(corner);
	}
	return found;
}

/** @param lastApexM apex of the corner before, behind which brake and lift may be for this bend */
function judged(bend: Bend, lastApexM: number, trace: ReferenceTrace): FoundCorner {
	const tightest = Math.max(...bend.peaks.map((peak) => peak.topMean));
	const apexM = bend.peaks[bend.peaks.length - 1].centre;
	const use = pedalUse(trace, Math.max(bend.startM - APPROACH_M, lastApexM), apexM);
	const slowedFor = (use.braked || use.lifted) && !slowingAt(trace, bend.endM);
	return {
		startM: bend.startM,
		apexM: bend.peaks[0].centre,
		apex2M: bend.peaks.length > 1 ? apexM : null,
		endM: bend.endM,
		direction: bend.hand > 0 ? 'left' : 'right',
		minRadiusM: 1 / tightest,
		angleDeg: (bend.angleRad * 180) / Math.PI,
		kind: use.braked ? 'braked' : use.lifted ? 'lifted' : use.known ? 'flat' : null,
		isCorner: isCornering(bend, trace) || slowedFor
	};
}

/** Takes the corners with an apex on the middle turn of the unrolled trace, numbers and links them. */
function numbered(found: FoundCorner[], trace: ReferenceTrace): Corner[] {
	const { lengthM, fromM, closed } = trace;
	const own = found.filter(({ apexM }) => !closed || (apexM + fromM >= 0 && apexM + fromM < lengthM));
	const corners = own.filter(({ isCorner }) => isCorner);
	const onPath = (place: number) => {
		const s = place + fromM;
		return closed ? s - Math.floor(s / lengthM) * lengthM : Math.min(Math.max(s, 0), lengthM);
	};
	return own.map((corner) => {
		const index = corners.indexOf(corner);
		const next = index < 0 ? undefined : corners[index + 1];
		// a chain is not carried over the line: laps are compared from line to line
		const linked = next !== undefined && isLinked(corner, next, trace);
		return {
			number: index < 0 ? null : index + 1,
			startM: onPath(corner.startM),
			apexM: onPath(corner.apexM),
			apex2M: corner.apex2M === null ? null : onPath(corner.apex2M),
			endM: onPath(corner.endM),
			direction: corner.direction,
			minRadiusM: corner.minRadiusM,
			angleDeg: corner.angleDeg,
			linkedTo: linked ? index + 2 : null,
			kind: corner.kind
		};
	});
}

function isLinked({ endM }: FoundCorner, { startM }: FoundCorner, trace: ReferenceTrace): boolean {
	const { timeS, size } = trace;
	const at = (place: number) => timeS[Math.min(Math.max(Math.round(place), 0), size - 1)];
	return at(startM) - at(endM) < LINKED_S && longestFullThrottle(trace, endM, startM) <= LINKED_FULL_S;
}
