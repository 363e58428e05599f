import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { gunzipSync } from 'node:zlib';
import { beforeAll, describe, expect, it } from 'vitest';
import { readRun } from '../../parse/index.ts';
import { analyseRun } from '../analyseRun.ts';
import { nearestPlace } from './cornerPlaces.ts';

/** Rows of a closed-form lap as a file has them; a second device is made by moving columns. */
let header: string[];
let rows: number[][];
beforeAll(() => {
	const path = fileURLToPath(
		new URL('../../../../fixtures/closed-form/marrow_fen_lap_ref_60hz.csv.gz', import.meta.url)
	);
	const [first, ...others] = gunzipSync(readFileSync(path)).toString('utf8').trim().split('\n');
	header = first.split(',');
	rows = others.map((line) => line.split(',').map(Number));
});

const column = (name: RegExp) => header.findIndex((text) => name.test(text));
const METRES_PER_DEG = 111_320;

/** The same lap by another device: positions off by some metres, some columns late by some samples. */
function recorded(shiftM: [number, number], late: RegExp[], samples: number): Buffer {
	const [latitude, longitude] = [column(/latitude/), column(/longitude/)];
	const lateColumns = late.map(column);
	const lines = rows.map((row, i) => {
		const out = [...row];
		for (const c of lateColumns) out[c] = rows[Math.min(Math.max(0, i - samples), rows.length - 1)][c];
		out[latitude] += shiftM[1] / METRES_PER_DEG;
		out[longitude] += shiftM[0] / (METRES_PER_DEG * Math.cos((row[latitude] * Math.PI) / 180));
		return out.join(',');
	});
	return Buffer.from([header.join(','), ...lines].join('\n'));
}

describe('two recordings of one lap', { timeout: 60_000 }, () => {
	it.each<{ name: string; shiftM: [number, number]; late: RegExp[]; samples: number }>([
		{ name: 'positions off by 2 m', shiftM: [1.4, -1.4], late: [], samples: 0 },
		{ name: 'pedals 0.2 s late', shiftM: [0, 0], late: [/throttle/, /brake/, /steering/], samples: 12 },
		{ name: 'pedals 0.2 s early', shiftM: [0, 0], late: [/throttle/, /brake/, /steering/], samples: -12 },
		{ name: 'both', shiftM: [-1.4, 1.4], late: [/throttle/, /brake/, /steering/], samples: 12 },
		{ name: 'positions off and 0.2 s late', shiftM: [2, 0], late: [/latitude/, /longitude/], samples: 12 }
	])('claims no other onset, pick-up or turn-in: $name', async ({ shiftM, late, samples }) => {
		const reference = await readRun(recorded([0, 0], [], 0), { fileName: 'reference.csv' });
		const driver = await readRun(recorded(shiftM, late, samples), { fileName: 'driver.csv' });
		const { document } = analyseRun(driver, { reference, grids: 'compared' });
		const { comparison, metrics, path, source } = document;
		expect(comparison?.findings).toEqual([]);
		expect(source.warnings.some(({ code }) => code === 'channel_lag')).toBe(samples !== 0);
		for (const own of metrics.filter(({ lap }) => lap === comparison?.lap)) {
			const other = comparison?.referenceMetrics.find(({ corner }) => corner === own.corner);
			for (const field of ['onsetM', 'pickUpM', 'releaseEndM'] as const) {
				const [mine, theirs] = [own[field], other?.[field] ?? null];
				if (mine === null || theirs === null) continue;
				const plusMinus = Math.hypot(own.plusMinus[field] ?? 0, other?.plusMinus[field] ?? 0);
				expect(Math.abs(nearestPlace(0, mine - theirs, path.lengthM))).toBeLessThanOrEqual(plusMinus);
			}
		}
	});
});
