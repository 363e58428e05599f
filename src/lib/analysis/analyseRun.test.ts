import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { gunzipSync } from 'node:zlib';
import { beforeAll, describe, expect, it } from 'vitest';
import { readRun, type RawRun } from '../parse/index.ts';
import { analysisDocumentSchema } from '../schemas/analysisDocument.ts';
import { analyseRun } from './analyseRun.ts';

async function read(fixture: string): Promise<RawRun[]> {
	const path = fileURLToPath(new URL(`../../../fixtures/${fixture}.csv.gz`, import.meta.url));
	return readRun(gunzipSync(readFileSync(path)), { fileName: `${fixture}.csv` });
}

let early: RawRun[];
let reference: RawRun[];
let session: RawRun[];
beforeAll(async () => {
	early = await read('closed-form/marrow_fen_lap_brake_early_60hz');
	reference = await read('closed-form/marrow_fen_lap_ref_60hz');
	session = await read('closed-form/marrow_fen_session_20hz');
});

describe('analyseRun', { timeout: 60_000 }, () => {
	it('compares nothing unless a reference is asked for', () => {
		const { document, grids } = analyseRun(session);
		expect(document.comparison).toBeNull();
		expect(grids.map((grid) => grid.lapNumber)).toEqual([1, 2, 3, 4, 5, 6, 7, 8]);
		expect(analysisDocumentSchema.safeParse(document).success).toBe(true);
	});

	it('gives metrics for every timed lap and numbered corner, and a time for every cell of a full lap', () => {
		const { document } = analyseRun(session, { grids: 'compared' });
		const { laps, corners, metrics, cells } = document;
		const timed = laps.filter((lap) => lap.kind === 'timed');
		const numbered = corners.filter((corner) => corner.number !== null);
		expect(metrics).toHaveLength(timed.length * numbered.length);
		for (const lap of timed) {
			expect(lap.cellS).toHaveLength(cells.length);
			const known = lap.cellS.filter((timeS) => timeS !== null);
			const sum = known.reduce((total, timeS) => total + timeS, 0);
			// cells are cut before onsets, so a lap's cells cover a whole turn, from the first cell's start to the same place again
			if (known.length === cells.length) expect(Math.abs(sum - lap.timeS)).toBeLessThan(0.6);
		}
	});

	it('has a theoretical best between the best that any corner allows and the best clean lap', () => {
		const { document } = analyseRun(session, { grids: 'compared' });
		const best = Math.min(...document.laps.filter((lap) => lap.clean).map((lap) => lap.timeS));
		expect(document.theoreticalBestS).not.toBeNull();
		expect(document.theoreticalBestS ?? NaN).toBeLessThanOrEqual(best + 1e-6);
		expect(document.theoreticalBestS ?? NaN).toBeGreaterThan(best - 0.05);
	});

	it('takes path, corners and cells from the reference, laps and metrics from the file', () => {
		const own = analyseRun(reference, { grids: 'compared' }).document;
		const { document } = analyseRun(early, { reference });
		expect(document.path).toEqual(own.path);
		expect(document.corners).toEqual(own.corners);
		expect(document.cells).toEqual(own.cells);
		expect(document.laps.find((lap) => lap.kind === 'timed')?.timeS).toBeCloseTo(71.333, 3);
		expect(document.comparison?.referenceMetrics.map((m) => m.minKmh)).toEqual(own.metrics.map((m) => m.minKmh));
	});

	it('lays a run on a known layout with the same result as on the run that the layout came from', () => {
		const { path, corners, cells, document } = analyseRun(reference, { grids: 'compared' });
		const again = analyseRun(reference, { layout: { path, corners, cells } });
		expect(again.document.path.line).toBe('layout');
		expect(again.document.laps.map((lap) => lap.timeS)).toEqual(
			document.laps.map((lap) => expect.closeTo(lap.timeS, 4))
		);
		expect(again.document.metrics.map((m) => m.onsetM)).toEqual(
			document.metrics.map((m) => (m.onsetM === null ? null : expect.closeTo(m.onsetM, 0)))
		);
		expect(again.grids).toHaveLength(1);
	});

	it('finds nothing to charge between two recordings of the same motion at other moments', () => {
		const { comparison } = analyseRun(session, { lap: 1, reference }).document;
		expect(Math.abs(comparison?.deltaS ?? NaN)).toBeLessThan(0.001);
		expect(comparison?.findings.filter(({ costS }) => (costS ?? 0) > 0.01)).toEqual([]);
	});

	it('takes the larger full pressure for both where each run guesses its own', async () => {
		const [kpa] = await read('import/brake_kpa');
		const softer: RawRun = {
			...kpa,
			columns: { ...kpa.columns, brake: kpa.columns.brake?.map((pressure) => pressure * 0.7) }
		};
		const { comparison, source } = analyseRun([softer], { reference: [kpa] }).document;
		expect(source.warnings.map(({ code }) => code)).toContain('brake_scale_assumed');
		const peaks = (metrics: { peakPct: number | null }[]) => Math.max(...metrics.map(({ peakPct }) => peakPct ?? 0));
		const own = analyseRun([softer], { reference: [kpa] }).document.metrics;
		expect(peaks(own) / peaks(comparison?.referenceMetrics ?? [])).toBeLessThan(0.85);
	});

	it('says that a file holds more runs, and takes the one asked for', () => {
		const both = [...early, ...reference];
		const first = analyseRun(both, { grids: 'compared' }).document;
		expect(first.source.warnings.map(({ code }) => code)).toContain('more_runs');
		const second = analyseRun(both, { run: 2, grids: 'compared' }).document;
		expect(second.source.warnings.map(({ code }) => code)).not.toContain('more_runs');
		expect(second.laps.find((lap) => lap.kind === 'timed')?.timeS).toBeCloseTo(70.876, 3);
	});

	it.each([
		{ name: 'a run that is not there', options: { run: 3 }, code: 'no_such_run' },
		{ name: 'a lap that is not there', options: { lap: 12, referenceLap: 1 }, code: 'no_such_lap' },
		{ name: 'a reference lap that is not there', options: { referenceLap: 12 }, code: 'no_such_lap' }
	])('refuses $name', ({ options, code }) => {
		expect(() => analyseRun(session, options)).toThrow(expect.objectContaining({ code }));
	});

	it('leaves the raw run as it was', () => {
		const copy = structuredClone(early);
		analyseRun(early, { grids: 'compared' });
		expect(early).toEqual(copy);
	});
});
