import { describe, expect, it } from 'vitest';
import { centreLine } from './centreLine.ts';
import { DEMO_RUNS } from './demoRuns.ts';
import { analyseRun } from '../analysis/analyseRun.ts';
import { readRun } from '../parse/index.ts';
import { driveRun, type DrivenRun } from './driveRun.ts';
import { writeRun } from './writeRun.ts';

const lapTimes = (run: DrivenRun): number[] => {
	const starts = run.timeS.filter((_, i) => i > 0 && run.lap[i] !== run.lap[i - 1]);
	return starts.slice(1).map((t, i) => t - starts[i]);
};
const mean = (values: number[]): number => values.reduce((sum, v) => sum + v, 0) / values.length;
const byKey = (key: string) => {
	const found = DEMO_RUNS.find((run) => run.key === key);
	if (!found) throw new Error(`no demo run ${key}`);
	return found;
};
const drive = (key: string): DrivenRun => driveRun(centreLine(byKey(key).circuit), byKey(key));

describe('the laps of the demo', () => {
	const reference = drive('reference');
	const latest = drive('latest');

	it('are the same on every machine', () => {
		expect(writeRun(byKey('kart'))).toBe(writeRun(byKey('kart')));
	});

	it('have the number of timed laps that the scenario names', () => {
		expect(lapTimes(reference)).toHaveLength(5);
		expect(lapTimes(latest)).toHaveLength(8);
	});

	it('spread as people do: neither identical nor wild', () => {
		const times = lapTimes(latest);
		const sd = Math.sqrt(mean(times.map((t) => (t - mean(times)) ** 2)));
		expect(sd).toBeGreaterThan(0.05);
		expect(sd).toBeLessThan(0.8);
	});

	it('leave something to coach: the driver is 0.8 to 4 s off the reference', () => {
		const gap = Math.min(...lapTimes(latest)) - Math.min(...lapTimes(reference));
		expect(gap).toBeGreaterThan(0.8);
		expect(gap).toBeLessThan(4);
	});

	it('brake in one clean application: at most one a corner and no pulse under 0.15 s', () => {
		const applications: number[] = [];
		let onset: number | null = null;
		for (let i = 0; i < latest.timeS.length; i++) {
			if (latest.lap[i] !== 3) continue;
			if (latest.brakePct[i] > 5) onset ??= latest.timeS[i];
			else if (onset !== null) {
				applications.push(latest.timeS[i] - onset);
				onset = null;
			}
		}
		expect(applications.length).toBeGreaterThanOrEqual(10);
		expect(applications.length).toBeLessThanOrEqual(12);
		expect(Math.min(...applications)).toBeGreaterThan(0.15);
	});

	it('change pedals within two samples and never press both for longer', () => {
		let longest = 0;
		let both = 0;
		for (let i = 0; i < latest.timeS.length; i++) {
			both = latest.brakePct[i] > 10 && latest.throttlePct[i] > 30 ? both + 1 : 0;
			longest = Math.max(longest, both);
		}
		expect(longest).toBeLessThanOrEqual(2);
	});

	it.each(['reference', 'short', 'kart'])('show the corners that the circuit has: %s', async (key) => {
		const demo = byKey(key);
		const raws = await readRun(new TextEncoder().encode(writeRun(demo)), { fileName: demo.fileName });
		const { document } = analyseRun(raws);
		const numbered = document.corners.filter((corner) => corner.number !== null);
		expect(numbered).toHaveLength(demo.circuit.vertices.length);
		expect(document.laps.filter((lap) => lap.clean)).toHaveLength(demo.laps);
	});
});
