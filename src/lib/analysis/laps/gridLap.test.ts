import { describe, expect, it } from 'vitest';
import { buildPath } from '../path/buildPath.ts';
import { cornerElements, drive, straight, symmetricCircuit } from '../path/testing/madeUpCircuit.ts';
import { gridLap } from './gridLap.ts';

const circuit = symmetricCircuit([straight(250), ...cornerElements(90, 40, 20)], 4);
const L = circuit.lengthM;
const speedMps = (place: number) => 30 + 10 * Math.cos((8 * Math.PI * place) / L);
const { channels, placeM, timeAt } = drive(circuit, {
	rateHz: 50,
	fromLap: -0.1,
	toLap: 2.05,
	speedMps,
	brakePct: (place) => 50 + 40 * Math.sin(place / 60)
});
const lapColumn = placeM.map((place) => Math.floor(place / L) + 1);
const lapDistanceM = placeM.map((place) => place - Math.floor(place / L) * L);
const gear = placeM.map((place) => 2 + (Math.floor((place + 5 * L) / 100) % 3));
const { placed } = buildPath({ ...channels, lapColumn, lapDistanceM, gear });
const lap = placed.laps[1];
const grid = gridLap(placed, lap, 150);

describe('gridLap', () => {
	it('has one entry for each metre, with a margin on both sides', () => {
		expect(grid.timeS).toHaveLength(Math.floor(placed.path.lengthM) + 301);
		expect(grid.timeS[150]).toBeCloseTo(0, 9);
		expect(grid.lapTimeS).toBe(lap.endS - lap.startS);
	});

	it('carries times within a tenth of a millisecond, and channels by place', () => {
		for (const s of [-120, -20, 10, 333, 700, Math.floor(L), Math.floor(L) + 40]) {
			const i = s + 150;
			expect(grid.timeS[i]).toBeCloseTo(timeAt(s) - timeAt(0), 4);
			expect(grid.speedKmh[i]).toBeCloseTo(speedMps(s) * 3.6, 1);
			expect(grid.brakePct?.[i]).toBeCloseTo(50 + 40 * Math.sin(s / 60), 1);
		}
	});

	it('holds the gear instead of drawing it slant', () => {
		expect(new Set(grid.gear?.filter((value) => !Number.isNaN(value)))).toEqual(new Set([2, 3, 4]));
	});

	it('has nothing where the run has no sample, and no channel that the run lacks', () => {
		const second = gridLap(placed, placed.laps[2], 150);
		expect(second.timeS[second.timeS.length - 1]).toBeNaN();
		expect(second.throttlePct).toBeNull();
		expect(gridLap(placed, placed.laps[0], 0).timeS.every(Number.isNaN)).toBe(true);
	});

	it('refuses half metres of margin', () => {
		expect(() => gridLap(placed, lap, 0.5)).toThrow(RangeError);
	});
});
