import { curvatureLobes } from './curvatureLobes.ts';
import type { Lobe, Peak } from './curvatureLobes.ts';
import { secondBraking } from './pedalUse.ts';
import type { ReferenceTrace } from './referenceTrace.ts';

/** A stretch of one hand with its ends, before it is called a corner or a kink. Places count from the trace's first entry, m. */
export interface Bend {
	hand: 1 | -1;
	startM: number;
	endM: number;
	/** in order; two where the car is turned in twice */
	peaks: Peak[];
	/** angle turned between start and end, rad, > 0 */
	angleRad: number;
}

/** Tighter than this is a corner whatever the car does. */
const TIGHT_RADIUS_M = 300;
/** So is what uses this share of the car's lateral envelope. */
const ENVELOPE_SHARE = 0.4;
/** Shares of the peak between which the flank is drawn on as a straight line. */
const LOW_SHARE = 0.3;
const HIGH_SHARE = 0.7;
/** Same-hand neighbours with a smaller gap are one corner. */
const JOIN_GAP_M = 6;
const JOIN_GAP_S = 0.5;
/** A lobe that turns less is no neighbour to be joined: a wobble, a fading end. */
const LEAST_JOINED_RAD = (4 * Math.PI) / 180;
/** A second peak is a second apex when its own part turns this much. */
const LEAST_APEX_RAD = (8 * Math.PI) / 180;
const LEAST_APEX_SHARE = 0.4;
/** Lobes that turn less than this are not looked at. */
const LEAST_BEND_RAD = (2 * Math.PI) / 180;

/**
 * Bends of a path in order: lobes of curvature with their ends, same-hand neighbours joined where nearly nothing lies between them.
 *
 * A bend starts and ends where its curvature, drawn on as a straight line from 30 % and 70 % of the peak, reaches zero (the end of
 * the transition), but no further than half-way into its neighbour.
 */
export function findBends(trace: ReferenceTrace): Bend[] {
	const { curvaturePerM } = trace;
	const parts = curvatureLobes(curvaturePerM).flatMap((lobe) => splitAtBraking(lobe, trace));
	const bends = parts.map((lobe) => asBend(lobe, curvaturePerM)).filter((bend) => bend.angleRad >= LEAST_BEND_RAD);
	separate(bends);
	const joined = joinNeighbours(bends, trace);
	const round = joined.find((bend) => trace.closed && bend.endM - bend.startM >= trace.lengthM);
	if (round) return [onceRound(round.hand, trace)];
	for (const bend of joined) {
		bend.angleRad = turned(curvaturePerM, bend.hand, bend.startM, bend.endM);
		bend.peaks = apexes(bend, curvaturePerM);
	}
	return joined;
}

/** A circuit that never stops turning to one hand is one bend, cut where it turns least. */
function onceRound(hand: 1 | -1, { curvaturePerM, lengthM, fromM }: ReferenceTrace): Bend {
	const height = (i: number) => hand * curvaturePerM[i];
	let least = -fromM;
	for (let i = least; i < lengthM - fromM; i++) if (height(i) < height(least)) least = i;
	let most = least;
	for (let i = least; i < least + lengthM; i++) if (height(i) > height(most)) most = i;
	const angleRad = turned(curvaturePerM, hand, least, least + lengthM - 1);
	// the apex lies on the turn that corners are taken from
	const shift = most >= lengthM - fromM ? Math.floor(lengthM) : 0;
	const peak = { at: most - shift, height: height(most), topMean: height(most), centre: most - shift };
	return { hand, startM: least - shift, endM: least - shift + lengthM, peaks: [peak], angleRad };
}

/** A second braking between two peaks of a lobe makes two of it, even where the curvature does not fall far. */
function splitAtBraking(lobe: Lobe, trace: ReferenceTrace): Lobe[] {
	const cut = lobe.valleys.findIndex((_, k) => secondBraking(trace, lobe.peaks[k].at, lobe.peaks[k + 1].at));
	if (cut < 0) return [lobe];
	const at = lobe.valleys[cut];
	const before = { ...lobe, peaks: lobe.peaks.slice(0, cut + 1), valleys: lobe.valleys.slice(0, cut), to: at };
	const behind = { ...lobe, peaks: lobe.peaks.slice(cut + 1), valleys: lobe.valleys.slice(cut + 1), from: at };
	return [before, ...splitAtBraking(behind, trace)];
}

function asBend({ hand, peaks, from, to }: Lobe, curvature: Float64Array): Bend {
	const startM = flankEnd(curvature, hand, peaks[0], -1, from);
	const endM = flankEnd(curvature, hand, peaks[peaks.length - 1], 1, to);
	return { hand, startM, endM, peaks, angleRad: turned(curvature, hand, startM, endM) };
}

/**
 * Where a flank reaches zero: its curvature drawn on from 70 % and 30 % of the peak; the lobe's border where it does not fall that far.
 */
function flankEnd(curvature: Float64Array, hand: 1 | -1, peak: Peak, direction: 1 | -1, border: number): number {
	const high = flankCrossing(curvature, hand, peak, direction, HIGH_SHARE, border);
	const low = flankCrossing(curvature, hand, peak, direction, LOW_SHARE, border);
	if (high === null || low === null) return border;
	return low + ((low - high) * LOW_SHARE) / (HIGH_SHARE - LOW_SHARE);
}

function flankCrossing(
	curvature: Float64Array,
	hand: 1 | -1,
	peak: Peak,
	direction: 1 | -1,
	share: number,
	border: number
): number | null {
	const level = share * peak.height;
	const outside = (i: number) => i < 0 || i >= curvature.length;
	// from outside inwards: a wobble on the flank does not end the corner
	for (let i = border; ; i -= direction) {
		const here = hand * curvature[i];
		if (here >= level) {
			const next = outside(i + direction) ? NaN : hand * curvature[i + direction];
			return next < level ? i + (direction * (here - level)) / (here - next) : null;
		}
		if (i === peak.at) return null;
	}
}

/** Angle turned to one hand between two places, rad. */
function turned(curvature: Float64Array, hand: 1 | -1, startM: number, endM: number): number {
	let angle = 0;
	for (let i = Math.max(Math.ceil(startM), 0); i <= Math.min(endM, curvature.length - 1); i++) {
		angle += Math.max(hand * curvature[i], 0);
	}
	return angle;
}

/** Ends of neighbours that overlap are put half-way. */
function separate(bends: Bend[]): void {
	for (let k = 0; k + 1 < bends.length; k++) {
		const [a, b] = [bends[k], bends[k + 1]];
		if (a.endM <= b.startM) continue;
		const middle = (a.endM + b.startM) / 2;
		a.endM = middle;
		b.startM = middle;
	}
}

/** Joins same-hand corners with nearly nothing between them; a kink beside a corner stays a kink. */
function joinNeighbours(bends: Bend[], trace: ReferenceTrace): Bend[] {
	const joined: Bend[] = [];
	for (const bend of bends) {
		const last = joined[joined.length - 1];
		if (last && belongTogether(last, bend, trace)) {
			last.endM = bend.endM;
			last.peaks = [...last.peaks, ...bend.peaks];
			last.angleRad += bend.angleRad;
		} else joined.push({ ...bend });
	}
	return joined;
}

function belongTogether(a: Bend, b: Bend, trace: ReferenceTrace): boolean {
	if (a.hand !== b.hand) return false;
	if (Math.min(a.angleRad, b.angleRad) < LEAST_JOINED_RAD) return false;
	if (!isCornering(a, trace) || !isCornering(b, trace)) return false;
	const middle = Math.min(Math.max(Math.round((a.endM + b.startM) / 2), 0), trace.size - 1);
	const gap = Math.max(JOIN_GAP_M, JOIN_GAP_S * trace.speedMps[middle]);
	if (b.startM - a.endM >= gap) return false;
	return !secondBraking(trace, a.peaks[a.peaks.length - 1].at, b.peaks[0].at);
}

/** Is a bend tight, or does it use a good part of the car's lateral envelope? */
export function isCornering({ peaks, startM, endM }: Bend, trace: ReferenceTrace): boolean {
	if (peaks.some((peak) => 1 / peak.height < TIGHT_RADIUS_M)) return true;
	const { curvaturePerM, speedMps, size, envelopeMps2 } = trace;
	for (let i = Math.max(Math.ceil(startM), 0); i <= Math.min(endM, size - 1); i++) {
		if (Math.abs(curvaturePerM[i]) * speedMps[i] ** 2 > ENVELOPE_SHARE * envelopeMps2) return true;
	}
	return false;
}

function highest(peaks: Peak[]): Peak {
	return peaks.reduce((best, peak) => (peak.height > best.height ? peak : best));
}

/** The one or two places where a bend is tightest: the highest peak, and the highest other one that turns on its own. */
function apexes({ peaks, hand, startM, endM }: Bend, curvature: Float64Array): Peak[] {
	const main = highest(peaks);
	const others = peaks.filter((peak, k) => {
		if (peak === main || peak.height < LEAST_APEX_SHARE * main.height) return false;
		const low = k > 0 ? (peaks[k - 1].at + peak.at) / 2 : startM;
		const high = k + 1 < peaks.length ? (peak.at + peaks[k + 1].at) / 2 : endM;
		return turned(curvature, hand, low, high) >= LEAST_APEX_RAD;
	});
	if (others.length === 0) return [main];
	return [main, highest(others)].sort((a, b) => a.at - b.at);
}
