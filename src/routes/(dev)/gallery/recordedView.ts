import { existsSync, readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import { analyseRun, type RunAnalysis } from '$lib/analysis/analyseRun';
import { compareLaps } from '$lib/analysis/compare/compareLaps';
import { DEMO_RUNS } from '$lib/demo/demoRuns';
import { writeRun } from '$lib/demo/writeRun';
import { readRun } from '$lib/parse';
import type { CornerMetrics } from '$lib/schemas/analysisDocument';
import type { ComparisonView, LapHead } from '$lib/schemas/views';
import { exampleComparison } from '$lib/view/example/exampleComparison';

/** Recordings that went the way of anybody's file: what real noise does to the drawings. */
export const RECORDED = [
	'demo',
	'fixtures/simulator/track-a_driver-3',
	'fixtures/simulator/track-x8_driver-1',
	'fixtures/simulator/oval-a_driver-3'
];

/**
 * The slowest clean lap of a recording laid on its best; for the demo, the driver's best on the coach's.
 *
 * @returns null where the fixtures are not at hand
 */
export async function recordedView(name: string): Promise<ComparisonView | null> {
	if (!RECORDED.includes(name)) return null;
	const run = (key: string) => DEMO_RUNS.find((candidate) => candidate.key === key) ?? DEMO_RUNS[0];
	const bytes = (text: string): Uint8Array => new TextEncoder().encode(text);
	const file = `${name}.csv.gz`;
	if (name !== 'demo' && !existsSync(file)) return null;
	const own = name === 'demo' ? bytes(writeRun(run('latest'))) : new Uint8Array(gunzipSync(readFileSync(file)));
	const raws = await readRun(own, { fileName: `${name}.csv` });
	const reference =
		name === 'demo' ? await readRun(bytes(writeRun(run('reference'))), { fileName: 'reference.csv' }) : raws;
	const other = analyseRun(reference);
	const driven = analyseRun(raws, { layout: { path: other.path, corners: other.corners, cells: other.cells } });
	const fast = pick(other, 'best');
	const slow = pick(driven, name === 'demo' ? 'best' : 'slowest');
	const of = (metrics: CornerMetrics[], lap: number): CornerMetrics[] => metrics.filter((m) => m.lap === lap);
	const driverMetrics = of(driven.document.metrics, slow.lapNumber);
	const referenceMetrics = of(other.document.metrics, fast.lapNumber);
	const names = name === 'demo' ? run('latest').circuit.vertices.map((vertex) => vertex.name) : [];
	const example = exampleComparison();
	const head = (lap: LapHead, grid: typeof fast): LapHead => ({ ...lap, number: grid.lapNumber, timeS: grid.lapTimeS });
	return {
		...example,
		driver: head(example.driver, slow),
		reference: head(example.reference, fast),
		layout: { ...example.layout, name: '', circuit: { ...example.layout.circuit, name }, lengthM: other.path.lengthM },
		path: other.path,
		corners: other.corners.map((corner) => ({
			...corner,
			id: null,
			name:
				(corner.number !== null &&
					names.length === other.corners.filter((c) => c.number !== null).length &&
					names[corner.number - 1]) ||
				null
		})),
		cells: other.cells,
		comparison: compareLaps({
			driver: { grid: slow, metrics: driverMetrics },
			reference: { grid: fast, metrics: referenceMetrics },
			corners: other.corners,
			run: {
				metrics: driven.document.metrics,
				cleanLaps: driven.document.laps.filter((lap) => lap.clean).map((lap) => lap.number),
				fullThrottle: driven.fullThrottle
			}
		}),
		driverMetrics,
		referenceMetrics,
		runMetrics: driven.document.metrics,
		driverGrid: slow,
		referenceGrid: fast
	};
}

function pick({ grids, document }: RunAnalysis, which: 'best' | 'slowest') {
	const clean = new Set(document.laps.filter((lap) => lap.clean).map((lap) => lap.number));
	const sorted = grids.filter((grid) => clean.has(grid.lapNumber)).sort((a, b) => a.lapTimeS - b.lapTimeS);
	const found = which === 'best' ? sorted[0] : sorted[sorted.length - 1];
	if (!found) throw new Error('a recording for the gallery requires a clean lap');
	return found;
}
