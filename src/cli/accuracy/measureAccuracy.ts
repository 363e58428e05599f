import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import { analyseRun, type AnalyseOptions } from '../../lib/analysis/index.ts';
import { readRun, type RawRun } from '../../lib/parse/index.ts';
import type { AnalysisDocument, LapDocument } from '../../lib/schemas/analysisDocument.ts';
import { AccuracyTable, type AccuracyRow, type Quantity, type Rate } from './accuracyTable.ts';
import {
	closedFormFile,
	passing,
	readClosedForm,
	readRecordings,
	type ClosedFormTruth,
	type Recording,
	type TruthLap
} from './closedFormTruth.ts';

/**
 * Measures the whole pipeline, from the bytes of a file to findings, against laps that are known in closed form. 10 Hz is every second row
 * of the 20 Hz file.
 */
export async function measureAccuracy(): Promise<AccuracyRow[]> {
	const truth = readClosedForm();
	const recordings = readRecordings();
	const table = new AccuracyTable();
	const reference = await read('marrow_fen_lap_ref_60hz.csv');
	const sessions = [
		{ rate: '60 Hz', file: 'marrow_fen_session_60hz.csv', every: 1 },
		{ rate: '20 Hz', file: 'marrow_fen_session_20hz.csv', every: 1 },
		{ rate: '10 Hz', file: 'marrow_fen_session_20hz.csv', every: 2 },
		{ rate: '60 Hz with noise', file: 'marrow_fen_noise_60hz.csv', every: 1 }
	] as const;
	for (const { rate, file, every } of sessions) {
		const raws = await read(file, every);
		measureSession({ truth, table, rate, raws, recording: recordings[file] });
	}
	for (const [rate, file] of [
		['60 Hz', 'marrow_fen_line_60hz.csv'],
		['60 Hz with noise', 'marrow_fen_line_noise_60hz.csv']
	] as const) {
		const raws = await read(file);
		const { laps } = pairLaps(analyseRun(raws).document, recordings[file]);
		for (const { lap, motion } of laps.slice(1)) {
			const { document } = analyseRun(raws, { lap: lap.number, reference });
			table.add('deltaOtherLine', rate, worstDelta(document, truth, motion));
		}
	}
	const noDistance = 'marrow_fen_nodist_60hz.csv';
	const raws = await read(noDistance);
	compareAll({ truth, table, rate: '60 Hz', raws, recording: recordings[noDistance] }, 'deltaTimeSpeed');
	return table.rows();
}

/** The file's runs, of every row or of every n-th. */
async function read(name: string, every = 1): Promise<RawRun[]> {
	const bytes = gunzipSync(readFileSync(closedFormFile(`${name}.gz`)));
	if (every === 1) return readRun(bytes, { fileName: name });
	const [head, ...rows] = bytes.toString('utf8').trimEnd().split('\n');
	const thinned = [head, ...rows.filter((_, i) => i % every === 0)].join('\n');
	return readRun(Buffer.from(`${thinned}\n`), { fileName: name });
}

interface Session {
	truth: ClosedFormTruth;
	table: AccuracyTable;
	rate: Rate;
	raws: RawRun[];
	recording: Recording;
}

interface PairedLap {
	lap: LapDocument;
	motion: string;
	timeS: number;
}

/** The document's laps for the recording's complete ones, by the time at which they start. */
function pairLaps(document: AnalysisDocument, recording: Recording): { laps: PairedLap[]; missed: number } {
	const firstS = recording.phase / recording.sample_rate_hz;
	const laps: PairedLap[] = [];
	let missed = 0;
	for (const { lap: index, motion, complete, lap_time_s: timeS } of recording.laps) {
		if (!complete || timeS === null) continue;
		const startS = recording.line_crossings_s[index - 1] - firstS;
		const lap = document.laps.find((one) => one.kind === 'timed' && Math.abs(one.startS - startS) < 0.5);
		if (lap) laps.push({ lap, motion, timeS });
		else missed++;
	}
	return { laps, missed };
}

function measureSession(session: Session): void {
	const { truth, table, rate, raws, recording } = session;
	const { document } = analyseRun(raws);
	const { laps, missed } = pairLaps(document, recording);
	for (let i = 0; i < missed; i++) table.add('lapTime', rate, NaN);
	for (const { lap, timeS } of laps) table.add('lapTime', rate, (lap.timeS - timeS) * 1e3);
	const corners = matchCorners(document, truth, table, rate);
	const add = (quantity: Quantity, error: number) => table.add(quantity, rate, error);
	const scale = truth.length_m / document.path.lengthM;

	for (const { lap, motion } of laps) {
		const driven = truth.laps[motion];
		for (const [number, found] of corners) {
			const exact = driven.corners.find(({ corner }) => corner === number);
			// the changed link has places of its own
			if (!exact || (motion === 'link_straight' && (number === 3 || number === 4))) continue;
			const shiftM = motion === 'link_straight' && number > 4 ? (driven.altered.path_length_change_m ?? 0) : 0;
			const m = document.metrics.find((one) => one.lap === lap.number && one.corner === found);
			const place = (metres: number | null | undefined) => (metres == null ? NaN : metres * scale + shiftM);
			const lateMs = (metres: number | null | undefined, atM: number) =>
				((place(metres) - atM) / passing(driven, atM).speedMps) * 1e3;
			const { brake, throttle, coasting } = exact;
			add('minSpeed', (m?.minKmh ?? NaN) - exact.min_speed_kmh);
			if (!brake || !throttle) continue;
			add('onset', place(m?.onsetM) - brake.onset_at['5'].m);
			add('peak', outside(m?.peakPct ?? NaN, heldLevel(brake.knots_s_pct, brake.peak_pct), brake.peak_pct));
			add('releaseEnd', lateMs(m?.releaseEndM, brake.end_at['2'].m));
			add('pickUp', place(m?.pickUpM) - throttle.first_over_5.m);
			if (throttle.first_95) add('fullThrottle', lateMs(m?.fullThrottleM, throttle.first_95.m));
			if (exact.kind === 'brake' && coasting)
				add('coasting', ((m?.coastingS ?? NaN) - coasting.throttle_lt5_brake_lt2_s) * 1e3);
			if (brake.hold) add('lightHold', ((m?.lightHoldS ?? NaN) - brake.hold.duration_s) * 1e3);
		}
	}
	compareAll(session, 'delta');
}

/** Document's corner numbers by true ones; every corner too many or too few is an error, and so is where one starts and ends. */
function matchCorners(
	document: AnalysisDocument,
	truth: ClosedFormTruth,
	table: AccuracyTable,
	rate: Rate
): Map<number, number> {
	const scale = truth.length_m / document.path.lengthM;
	const found = new Map<number, number>();
	let extra = 0;
	for (const { number, startM, endM, direction } of document.corners) {
		if (number === null) continue;
		const middle = ((startM + endM) / 2) * scale;
		const exact = truth.corners.find((c) => c.direction === direction && middle > c.start_m && middle < c.end_m);
		if (!exact || found.has(exact.corner)) {
			extra++;
			continue;
		}
		found.set(exact.corner, number);
		// between the linked corners start and end depend on the lap that the path was taken from
		if (exact.corner !== 4) table.add('cornerEdge', rate, startM * scale - exact.start_m);
		if (exact.corner !== 3) table.add('cornerEdge', rate, endM * scale - exact.end_m);
	}
	table.add('corners', rate, extra + truth.corners.length - found.size);
	return found;
}

/** Compares every altered lap of a session with its reference lap. */
function compareAll({ truth, table, rate, raws, recording }: Session, quantity: Quantity): void {
	const { laps } = pairLaps(analyseRun(raws).document, recording);
	const reference = laps.find(({ motion }) => motion === 'ref');
	if (!reference) return;
	for (const { lap, motion } of laps) {
		if (lap === reference.lap) continue;
		const options: AnalyseOptions = { lap: lap.number, referenceLap: reference.lap.number };
		const { document } = analyseRun(raws, options);
		const { comparison, corners } = document;
		if (!comparison) continue;
		table.add(quantity, rate, worstDelta(document, truth, motion));
		const sum = comparison.ledger.reduce((total, row) => total + row.totalS, 0);
		table.add('ledger', rate, (sum - comparison.deltaS) * 1e6);
		const lostS = truth.laps[motion].delta_final_s ?? 0;
		if (quantity !== 'delta' || !(lostS > 0.01)) continue;
		const [first] = comparison.findings;
		const corner = corners.find(({ number }) => number === first?.corner);
		const exact = truth.corners.find((c) => c.corner === truth.laps[motion].altered.corner);
		const there = corner && exact && corner.apexM > exact.start_m && corner.apexM < exact.end_m;
		table.add('findingCost', rate, there ? ((first.costS ?? NaN) - lostS) * 1e3 : NaN);
	}
}

/** Worst error of Δ over the lap, ms, leaving out the changed link, which has a path of its own. */
function worstDelta({ comparison, path }: AnalysisDocument, truth: ClosedFormTruth, motion: string): number {
	if (!comparison) return NaN;
	const { delta, deltaS } = comparison;
	const lap: TruthLap = truth.laps[motion];
	const exact = lap.delta_every_2_m_of_reference_distance_s;
	const scale = path.lengthM / truth.length_m;
	let worst = Math.abs(deltaS - (lap.delta_final_s ?? 0));
	for (let s = 2; s < truth.length_m - 2; s += 2) {
		if (motion === 'link_straight' && s > 690 && s < 820) continue;
		const at = s * scale;
		const i = Math.floor(at);
		const own = delta[i] + (delta[i + 1] - delta[i]) * (at - i);
		worst = Math.max(worst, Math.abs(own - (exact ? exact[s / 2] : 0)));
	}
	return worst * 1e3;
}

const outside = (x: number, low: number, high: number) => (Number.isFinite(x) ? Math.max(0, low - x, x - high) : NaN);

/** Highest level that a pedal is at or above for 0.05 s, from its corner points. */
function heldLevel(knots: readonly [number, number][], peakPct: number): number {
	const heldS = (level: number) =>
		knots.slice(1).reduce((sum, [toS, to], i) => {
			const [fromS, from] = knots[i];
			const high = Math.max(from, to);
			const low = Math.min(from, to);
			if (high < level) return sum;
			return sum + (low >= level ? toS - fromS : ((toS - fromS) * (high - level)) / (high - low));
		}, 0);
	let level = peakPct;
	while (level > 0 && heldS(level) < 0.05) level -= 0.1;
	return level;
}
