import { describe, expect, it } from 'vitest';
import { readClosedForm, sampleRun } from '../metrics/testing/closedForm.ts';
import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import { cornerSpread, ownBest } from './ownBest.ts';
import { rollingLap } from './rollingLap.ts';

const laps = [1, 2, 3, 4].map((number) => ({ number, clean: number !== 4 }));

describe('ownBest', () => {
	const cells = [
		{ corners: [1], startM: 0, endM: 400 },
		{ corners: [2, 3], startM: 400, endM: 0 }
	];

	it('sets the best clean pass of each cell beside the median', () => {
		const cellS = [
			[10.2, 30.4],
			[10.0, 30.9],
			[10.5, 30.1],
			[9.1, 28.0]
		];
		expect(ownBest(cells, cellS, laps)).toEqual([
			{ corners: [1], bestS: 10.0, lap: 2, medianS: 10.2, laps: 3 },
			{ corners: [2, 3], bestS: 30.1, lap: 3, medianS: 30.4, laps: 3 }
		]);
	});

	it('knows no normal from two passes', () => {
		expect(ownBest(cells.slice(0, 1), [[10], [null], [11], [9]], laps)).toEqual([]);
	});
});

describe('cornerSpread', () => {
	it('is the standard deviation over clean laps, places on either side of the line the short way', () => {
		const metrics = [995, 2, 998, 500].map(
			(onsetM, i) => ({ lap: i + 1, corner: 1, onsetM, minKmh: 80 + i, timeS: null }) as CornerMetrics
		);
		const corner = { number: 1, apexM: 30 } as Parameters<typeof cornerSpread>[0][number];
		// −5, 2, −2: mean −5/3, s.d. 3.512 (n − 1); 80, 81, 82: s.d. 1
		const [spread] = cornerSpread([corner], metrics, [1, 2, 3], 1000);
		expect(spread).toMatchObject({ corner: 1, minSpeedSdKmh: 1, timeSdS: null, laps: 3 });
		expect(spread.onsetSdM).toBeCloseTo(3.5119, 4);
	});
});

describe('rollingLap', () => {
	const truth = readClosedForm();
	const run = (motions: string[]) => sampleRun(truth, { rateHz: 50, phase: 0.3, laps: motions });

	it('is the best lap itself where all laps are the same', () => {
		const best = rollingLap(run(['ref', 'ref']));
		expect(best?.timeS).toBeCloseTo(truth.laps.ref.lap_time_s, 2);
	});

	it('finds the full length that leaves both mistakes out: an early one in the first lap, a late one in the second', () => {
		// the first lap loses at corner 1, the second at corner 8
		const best = rollingLap(run(['brake_early', 'low_min_speed']));
		const slower = Math.min(truth.laps.brake_early.lap_time_s, truth.laps.low_min_speed.lap_time_s);
		expect(best?.timeS).toBeLessThan(slower - 0.05);
		expect(best?.timeS).toBeGreaterThan(truth.laps.ref.lap_time_s - 0.02);
		expect(best?.lap).toBe(1);
		expect(best?.startM).toBeGreaterThan(truth.corners[0].end_m);
	});

	it('uses clean laps alone, and needs a closed path', () => {
		const placed = run(['brake_early', 'low_min_speed']);
		placed.laps[1].clean = false;
		expect(rollingLap(placed)?.timeS).toBeCloseTo(truth.laps.brake_early.lap_time_s, 2);
		placed.laps[0].clean = false;
		expect(rollingLap(placed)).toBeNull();
		expect(rollingLap({ ...run(['ref']), path: { ...placed.path, closed: false } })).toBeNull();
	});
});
