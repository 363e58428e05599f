import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import type { Corner } from '../../../schemas/analysisDocument.ts';
import type { Lap, PlacedRun } from '../../model.ts';
import { channelsOf } from './channelsOf.ts';
import { seededNormal } from './seededNormal.ts';

/** The closed-form circuit of fixtures/closed-form, as far as tests of metrics read it. */
export interface ClosedForm {
	length_m: number;
	corners: {
		corner: number;
		direction: 'left' | 'right';
		start_m: number;
		end_m: number;
		apex_m: number;
		arc_start_m: number;
		arc_end_m: number;
		transition_m: number;
		radius_m: number;
		angle_deg: number;
	}[];
	elements_length_k0_k1: [number, number, number][];
	steering: { wheelbase_m: number; ratio: number };
	laps: Record<string, ClosedFormLap>;
}

export interface ClosedFormLap {
	lap_time_s: number;
	segments_s0_s1_t0_v0_a: [number, number, number, number, number][];
	throttle_knots_s_pct: [number, number][];
	brake_knots_s_pct: [number, number][];
	altered: {
		straight_start_m?: number;
		straight_end_m?: number;
		path_length_change_m?: number;
		clothoid_length_m?: number;
	};
	corners: {
		corner: number;
		kind: 'brake' | 'brake_to_link' | 'link' | 'lift';
		min_speed_kmh: number;
		min_speed_from_m: number;
		min_speed_to_m: number;
		brake: null | {
			peak_pct: number;
			knots_s_pct: [number, number][];
			onset_at: Record<'2' | '5' | '10', { s: number; m: number }>;
			end_at: Record<'2' | '5' | '10', { s: number; m: number }>;
			hold?: { duration_s: number; start_s: number; end_s: number };
			release_start_s: number;
		};
		throttle: {
			first_over_5: { s: number; m: number };
			first_95: { s: number; m: number } | null;
			lift_end_s: number;
		};
		coasting: { throttle_lt5_brake_lt2_s: number };
	}[];
}

export function readClosedForm(): ClosedForm {
	const file = new URL('../../../../../fixtures/closed-form/marrow_fen.truth.json.gz', import.meta.url);
	return JSON.parse(gunzipSync(readFileSync(file)).toString('utf8')) as ClosedForm;
}

/** Corners as the truth has them; the third and the fourth are linked. */
export function cornersOf(truth: ClosedForm): Corner[] {
	return truth.corners.map((corner) => ({
		number: corner.corner,
		startM: corner.start_m,
		apexM: corner.apex_m,
		apex2M: null,
		endM: corner.end_m,
		direction: corner.direction,
		minRadiusM: corner.radius_m,
		angleDeg: Math.abs(corner.angle_deg),
		linkedTo: corner.corner === 3 || corner.corner === 4 ? corner.corner + 1 : null,
		kind: 'braked'
	}));
}

/** Last row whose entry in a column is at most a value; the first where none is. Rows ascend by that column. */
function lastRow<Row extends readonly number[]>(rows: Row[], column: number, value: number): Row {
	let low = 0;
	let high = rows.length - 1;
	while (low < high) {
		const middle = (low + high + 1) >> 1;
		if (rows[middle][column] <= value) low = middle;
		else high = middle - 1;
	}
	return rows[low];
}

/** Value of a piecewise straight course at a time; the end values hold outside. */
export function knotValue(knots: [number, number][], atS: number): number {
	const last = knots[knots.length - 1];
	if (atS >= last[0]) return last[1];
	const before = lastRow(knots, 0, atS);
	if (atS <= before[0]) return before[1];
	const after = knots[knots.indexOf(before) + 1];
	return before[1] + ((after[1] - before[1]) * (atS - before[0])) / (after[0] - before[0]);
}

/** Place and speed of a lap at a time from its line. */
export function motionAt(lap: ClosedFormLap, atS: number): { placeM: number; speedMps: number } {
	const [s0, , t0, v0, a] = lastRow(lap.segments_s0_s1_t0_v0_a, 2, atS);
	const d = atS - t0;
	return { placeM: s0 + v0 * d + (a * d * d) / 2, speedMps: v0 + a * d };
}

export interface Sampling {
	rateHz: number;
	/** share of a sampling interval by which the first sample lies behind the start */
	phase: number;
	/** s.d.; the brake is cut off at 0, as a sensor's reading is */
	noise?: { speedKmh: number; brakePct: number };
	seed?: number;
	laps?: string[];
}

/** A run of several closed-form laps sampled at a rate: an out lap from 30 m before the last corner, the laps, and the reference's first 15 s. */
export function sampleRun(truth: ClosedForm, sampling: Sampling): PlacedRun {
	const { rateHz, phase, noise, seed = 1, laps: motions = Object.keys(truth.laps) } = sampling;
	const normal = seededNormal(seed);
	const ref = truth.laps.ref;
	const outS = ref.lap_time_s - 8;
	const starts: number[] = [];
	let endS = 8;
	for (const motion of motions) {
		starts.push(endS);
		endS += truth.laps[motion].lap_time_s;
	}
	const columns = { timeS: [], speedKmh: [], brakePct: [], throttlePct: [], steeringDeg: [] } as Record<
		'timeS' | 'speedKmh' | 'brakePct' | 'throttlePct' | 'steeringDeg',
		number[]
	>;
	const placeM: number[] = [];
	const curvature: number[] = [];
	for (let k = 0; (k + phase) / rateHz < endS + 15; k++) {
		const t = (k + phase) / rateHz;
		const index = starts.findLastIndex((start) => start <= t);
		const isLast = t >= endS;
		const lap = index < 0 || isLast ? ref : truth.laps[motions[index]];
		const own = index < 0 ? t + outS : isLast ? t - endS : t - starts[index];
		const { placeM: s, speedMps } = motionAt(lap, own);
		const brake = knotValue(lap.brake_knots_s_pct, own);
		columns.timeS.push(Math.round((t - phase / rateHz) * 1e4) / 1e4);
		columns.speedKmh.push(speedMps * 3.6 + (noise ? noise.speedKmh * normal() : 0));
		columns.brakePct.push(noise ? Math.max(0, brake + noise.brakePct * normal()) : Math.round(brake * 100) / 100);
		columns.throttlePct.push(Math.round(knotValue(lap.throttle_knots_s_pct, own) * 100) / 100);
		const kappa = curvatureAt(truth, lap, s);
		columns.steeringDeg.push((Math.atan(truth.steering.wheelbase_m * kappa) * truth.steering.ratio * 180) / Math.PI);
		curvature.push(kappa);
		const turn = index < 0 ? -1 : isLast ? motions.length : index;
		placeM.push(turn * truth.length_m + onReference(lap, s));
	}
	const t0 = phase / rateHz;
	const channels = channelsOf(columns);
	const laps: Lap[] = motions.map((motion, turn) => ({
		number: turn + 1,
		kind: 'timed',
		startS: starts[turn] - t0,
		endS: starts[turn] + truth.laps[motion].lap_time_s - t0,
		lengthM: truth.length_m,
		clean: true,
		reasons: [],
		plusMinusS: 0,
		turn
	}));
	return {
		channels,
		placeM: Float64Array.from(placeM),
		offsetM: null,
		curvaturePerM: Float64Array.from(curvature),
		laps,
		path: {
			lengthM: truth.length_m,
			closed: true,
			xM: new Float64Array(0),
			yM: new Float64Array(0),
			curvaturePerM: new Float64Array(0),
			origin: 'positions',
			line: 'mark',
			speedKmh: new Float64Array(0),
			frame: null
		}
	};
}

/** A lap with a straight between its linked corners is a little shorter; its places behind are moved back onto the reference. */
function onReference(lap: ClosedFormLap, s: number): number {
	const { straight_start_m: from, straight_end_m: to, path_length_change_m: change } = lap.altered;
	if (from === undefined || to === undefined || change === undefined || s < from) return s;
	return s - change * Math.min(1, (s - from) / (to - from));
}

function curvatureAt(truth: ClosedForm, lap: ClosedFormLap, s: number): number {
	const { straight_start_m: from, straight_end_m: to, clothoid_length_m: ramp } = lap.altered;
	if (from !== undefined && to !== undefined && ramp !== undefined && s > from - ramp && s < to + ramp) {
		const [first, second] = [truth.corners[2], truth.corners[3]].map(
			(corner) => (corner.direction === 'left' ? 1 : -1) / corner.radius_m
		);
		return s < from ? (first * (from - s)) / ramp : s > to ? (second * (s - to)) / ramp : 0;
	}
	const [start, length, k0, k1] = lastRow(elementsFrom(truth), 0, s);
	return k0 + ((k1 - k0) * (s - start)) / length;
}

const elements = new WeakMap<ClosedForm, [number, number, number, number][]>();

/** The path's elements, each with the place where it begins. */
function elementsFrom(truth: ClosedForm): [number, number, number, number][] {
	const known = elements.get(truth);
	if (known) return known;
	let start = 0;
	const listed = truth.elements_length_k0_k1.map(([length, k0, k1]): [number, number, number, number] => {
		start += length;
		return [start - length, length, k0, k1];
	});
	elements.set(truth, listed);
	return listed;
}
