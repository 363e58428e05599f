import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { RunReader } from '../../parse/index.ts';
import { prepareChannels } from '../channels/prepareChannels.ts';
import { findCorners } from '../corners/findCorners.ts';
import { ErrorTable } from '../metrics/testing/errorTable.ts';
import { readClosedForm } from '../metrics/testing/closedForm.ts';
import type { ClosedFormLap } from '../metrics/testing/closedForm.ts';
import type { Channels, Lap, PlacedRun } from '../model.ts';
import { timeAtPlace } from '../trace/placeTime.ts';
import { buildPath } from './buildPath.ts';
import { placeRun } from './placeRun.ts';

/**
 * Laps, path, corners and times at places against laps known in closed form (fixtures/closed-form), from the files' bytes on.
 * Bars are the product's own: what 95 of 100 errors must keep, for lap times what the worst must keep.
 */
const FILES = new URL('../../../../fixtures/closed-form/', import.meta.url);
const truth = readClosedForm();

interface FileTruth {
	sample_rate_hz: number;
	phase: number;
	line_crossings_s: number[];
	laps: { lap: number; motion: string; complete: boolean; lap_time_s: number | null }[];
}
const files = JSON.parse(
	gunzipSync(readFileSync(new URL('marrow_fen.files.truth.json.gz', FILES))).toString('utf8')
) as Record<string, FileTruth>;

function read(name: string): Channels {
	const reader = new RunReader({ fileName: name });
	reader.push(gunzipSync(readFileSync(new URL(`${name}.gz`, FILES))));
	return prepareChannels(reader.end()[0]);
}

function timeOf(lap: ClosedFormLap, placeM: number): number {
	const segments = lap.segments_s0_s1_t0_v0_a;
	const [s0, , t0, v0, a] = segments.findLast((segment) => segment[0] <= placeM + 1e-9) ?? segments[0];
	const way = placeM - s0;
	return t0 + (2 * way) / (v0 + Math.sqrt(Math.max(v0 * v0 + 2 * a * way, 0)));
}

const table = new ErrorTable();
const BARS: Record<string, Record<string, number>> = {
	'lap time, ms (worst)': { clean: 1, '20 Hz': 1, noise: 1 },
	'lap start, ms': { clean: 1, '20 Hz': 1, noise: 1 },
	'lap column alone, ms': { clean: 1000 / 60 + 1 },
	'Δ same line, ms': { clean: 1, '20 Hz': 1, noise: 25 },
	'Δ other line, ms': { clean: 1, noise: 25 },
	'corner start, end, m': { clean: 2, '20 Hz': 2, noise: 15 },
	'corner radius, %': { clean: 3, '20 Hz': 3, noise: 10 },
	'path length, %': { clean: 0.4, '20 Hz': 0.4, noise: 1 },
	'line chosen, lap time, ms': { '10 Hz': 1 }
};
const barOf = (quantity: string, rate: string) => BARS[quantity][rate];

/** The timed laps that the file's complete ones are, with the motion driven. */
function pairs(laps: Lap[], file: FileTruth): { lap: Lap; motion: string; timeS: number; startS: number }[] {
	const t0 = file.phase / file.sample_rate_hz;
	return file.laps
		.filter(({ complete }) => complete)
		.map(({ lap: number, motion, lap_time_s }) => {
			const startS = file.line_crossings_s[number - 1] - t0;
			const lap = laps.find((candidate) => candidate.kind === 'timed' && Math.abs(candidate.startS - startS) < 0.5);
			if (!lap || lap_time_s === null) throw new Error(`lap ${number} was not found`);
			return { lap, motion, timeS: lap_time_s, startS };
		});
}

/** A lap on its path. */
interface PlacedLap {
	placed: PlacedRun;
	lap: Lap;
	motion: string;
}

/** Worst error over a lap of the time delta to another lap on the same path. */
function worstDeltaMs(driver: PlacedLap, reference: PlacedLap): number {
	const scale = driver.placed.path.lengthM / truth.length_m;
	const since = ({ placed, lap }: PlacedLap, s: number) =>
		timeAtPlace(placed, (lap.turn ?? NaN) * placed.path.lengthM + s * scale) - lap.startS;
	let worst = 0;
	for (let s = 2; s < truth.length_m - 2; s += 2) {
		const exact = timeOf(truth.laps[driver.motion], s) - timeOf(truth.laps[reference.motion], s);
		worst = Math.max(worst, Math.abs(since(driver, s) - since(reference, s) - exact) * 1000);
	}
	return worst;
}

function lapTimes(rate: string, placed: PlacedRun, file: FileTruth, quantity = 'lap time, ms (worst)'): void {
	const found = pairs(placed.laps, file);
	expect(placed.laps.filter(({ kind }) => kind === 'timed')).toHaveLength(found.length);
	for (const { lap, timeS, startS } of found) {
		table.add(quantity, rate, (lap.endS - lap.startS - timeS) * 1000);
		if (quantity === 'lap time, ms (worst)') table.add('lap start, ms', rate, (lap.startS - startS) * 1000);
	}
}

function corners(rate: string, placed: PlacedRun): void {
	const scale = truth.length_m / placed.path.lengthM;
	table.add('path length, %', rate, (1 / scale - 1) * 100);
	const found = findCorners(placed).filter(({ number }) => number !== null);
	expect(found).toHaveLength(truth.corners.length);
	truth.corners.forEach((corner, k) => {
		expect(found[k].direction).toBe(corner.direction);
		// between the linked corners one lap of the session drives another line
		if (corner.corner !== 4) table.add('corner start, end, m', rate, found[k].startM * scale - corner.start_m);
		if (corner.corner !== 3) table.add('corner start, end, m', rate, found[k].endM * scale - corner.end_m);
		table.add('corner radius, %', rate, ((found[k].minRadiusM ?? NaN) / corner.radius_m - 1) * 100);
	});
}

describe('laps known in closed form', () => {
	it.each([
		{ name: 'marrow_fen_session_60hz.csv', rate: 'clean' },
		{ name: 'marrow_fen_session_20hz.csv', rate: '20 Hz' },
		{ name: 'marrow_fen_noise_60hz.csv', rate: 'noise' }
	])('$name: laps, corners and times at places', ({ name, rate }) => {
		const { placed } = buildPath(read(name));
		lapTimes(rate, placed, files[name]);
		corners(rate, placed);
		// one motion drives its link on another line, where the truth depends on the path
		const laps = pairs(placed.laps, files[name]).filter(({ motion }) => motion !== 'link_straight');
		for (const { lap, motion } of laps.slice(1)) {
			table.add('Δ same line, ms', rate, worstDeltaMs({ placed, lap, motion }, { placed, ...laps[0] }));
		}
	});

	it.each([
		{ name: 'marrow_fen_line_60hz.csv', rate: 'clean' },
		{ name: 'marrow_fen_line_noise_60hz.csv', rate: 'noise' }
	])('$name: other lines on the path of a lap on the centre line', ({ name, rate }) => {
		const { path, placed: own } = buildPath(read('marrow_fen_lap_ref_60hz.csv'));
		const reference = { placed: own, lap: own.laps[1], motion: 'ref' };
		const { placed } = placeRun(read(name), path);
		lapTimes(rate, placed, files[name]);
		for (const { lap, motion } of pairs(placed.laps, files[name])) {
			table.add('Δ other line, ms', rate, worstDeltaMs({ placed, lap, motion }, reference));
		}
	});

	it('marrow_fen_nodist_60hz.csv: a lap column alone', () => {
		const name = 'marrow_fen_nodist_60hz.csv';
		lapTimes('clean', buildPath(read(name)).placed, files[name], 'lap column alone, ms');
	});

	it('marrow_fen_gpsonly_10hz.csv: a line that is chosen closes the lap, one that is given is the file’s', () => {
		const name = 'marrow_fen_gpsonly_10hz.csv';
		const channels = read(name);
		const chosen = buildPath(channels);
		expect(chosen.path.line).toBe('chosen');
		expect(chosen.laps.filter(({ kind }) => kind === 'timed').length).toBeGreaterThanOrEqual(7);
		const line = { latitudeA: 41.1998, longitudeA: -30.4, latitudeB: 41.2002, longitudeB: -30.4 };
		const given = buildPath(channels, { line });
		expect(given.path.line).toBe('mark');
		lapTimes('10 Hz', given.placed, files[name], 'line chosen, lap time, ms');
	});

	it('keeps every bar', () => {
		console.log(table.print(barOf));
		for (const [quantity, byRate] of Object.entries(BARS)) {
			for (const [rate, bar] of Object.entries(byRate)) {
				const { p95, worst, count } = table.row(quantity, rate);
				expect(count, `${quantity}, ${rate}`).toBeGreaterThan(0);
				expect(quantity.includes('worst') ? worst : p95, `${quantity}, ${rate}`).toBeLessThanOrEqual(bar);
			}
		}
	});
});
