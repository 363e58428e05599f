import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { gunzipSync } from 'node:zlib';

/**
 * The laps of `fixtures/closed-form`: circuit, motions and recordings as formulas and tables, as their README describes them.
 */

export interface TruthCorner {
	corner: number;
	kind: string;
	start_m: number;
	end_m: number;
	entry_speed_kmh: number;
	exit_speed_kmh: number;
	min_speed_kmh: number;
	min_speed_from_m: number;
	min_speed_to_m: number;
	corner_time_s: number;
	brake?: null | {
		peak_pct: number;
		peak_first_m: number;
		ramp_s: number;
		release_start_m: number;
		release_start_s: number;
		onset_at: Record<string, { m: number; s: number }>;
		end_at: Record<string, { m: number; s: number }>;
		knots_s_pct: [number, number][];
		hold?: { duration_s: number } | null;
	};
	throttle?: null | { first_over_5: { m: number }; first_95?: { m: number } | null; lift_end_m: number };
	coasting?: null | { throttle_lt5_brake_lt2_s: number };
}

export interface TruthLap {
	lap_time_s: number;
	delta_final_s?: number;
	altered: { corner?: number; corner2?: number; what: string; path_length_change_m?: number };
	segments_s0_s1_t0_v0_a: [number, number, number, number, number][];
	throttle_knots_s_pct: [number, number][];
	brake_knots_s_pct: [number, number][];
	corners: TruthCorner[];
	delta_every_2_m_of_reference_distance_s?: number[];
}

/** One recording: when it crosses the line, and which motion each lap is. */
export interface Recording {
	sample_rate_hz: number;
	/** of a sample step; the first sample is at this share of a step */
	phase: number;
	line_crossings_s: number[];
	laps: { lap: number; motion: string; complete: boolean; lap_time_s: number | null }[];
}

export interface ClosedFormTruth {
	length_m: number;
	corners: {
		corner: number;
		start_m: number;
		apex_m: number;
		end_m: number;
		arc_start_m: number;
		arc_end_m: number;
		transition_m: number;
		radius_m: number;
		angle_deg: number;
		direction: 'left' | 'right';
	}[];
	laps: Record<string, TruthLap>;
}

/** Reads the circuit's truth file; what stands in it is described in the folder's README. */
export function readClosedForm(): ClosedFormTruth {
	return unpack<ClosedFormTruth>('marrow_fen.truth.json.gz');
}

/** Reads what the recordings hold, by file name without `.gz`. */
export function readRecordings(): Record<string, Recording> {
	return unpack<Record<string, Recording>>('marrow_fen.files.truth.json.gz');
}

/** Path of a fixture of this folder. */
export function closedFormFile(name: string): string {
	return fileURLToPath(new URL(`../../../fixtures/closed-form/${name}`, import.meta.url));
}

function unpack<T>(name: string): T {
	return JSON.parse(gunzipSync(readFileSync(closedFormFile(name))).toString('utf8'));
}

function pieceAt(lap: TruthLap, placeM: number): [number, number, number, number, number] {
	const pieces = lap.segments_s0_s1_t0_v0_a;
	let low = 0;
	let high = pieces.length - 1;
	while (low < high) {
		const middle = (low + high + 1) >> 1;
		if (pieces[middle][0] <= placeM) low = middle;
		else high = middle - 1;
	}
	return pieces[low];
}

/** Passing time and speed at a place, in closed form. */
export function passing(lap: TruthLap, placeM: number): { timeS: number; speedMps: number } {
	const [s0, , t0, v0, a] = pieceAt(lap, placeM);
	const way = placeM - s0;
	const speedMps = Math.sqrt(Math.max(v0 * v0 + 2 * a * way, 0));
	return { timeS: t0 + (2 * way) / (v0 + speedMps), speedMps };
}

/** A pedal's position at a time, from its corner points. */
export function pedalAt(points: [number, number][], timeS: number): number {
	const at = points.findLastIndex(([t]) => t <= timeS);
	if (at < 0) return points[0][1];
	if (at + 1 >= points.length) return points[at][1];
	const [ta, ya] = points[at];
	const [tb, yb] = points[at + 1];
	return tb > ta ? ya + ((yb - ya) * (timeS - ta)) / (tb - ta) : yb;
}
