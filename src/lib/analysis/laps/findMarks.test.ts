import { describe, expect, it } from 'vitest';
import type { Channels } from '../model.ts';
import { freshPositions } from '../path/freshPositions.ts';
import { cornerElements, drive, straight, symmetricCircuit } from '../path/testing/madeUpCircuit.ts';
import type { Drive } from '../path/testing/madeUpCircuit.ts';
import { findMarks } from './findMarks.ts';

const circuit = symmetricCircuit(
	[straight(160), ...cornerElements(-60, 40, 15), straight(80), ...cornerElements(150, 25, 12)],
	4
);
const L = circuit.lengthM;
const speedMps = (place: number) =>
	30 +
	6 * Math.cos((2 * Math.PI * place) / L) +
	5 * Math.sin((10 * Math.PI * place) / L + 1) +
	3 * Math.cos((14 * Math.PI * place) / L);
const base: Drive = { rateHz: 20, fromLap: -0.4, toLap: 4.3, speedMps, phase: 0.37 };

/** A drive with what the file says of laps, and without positions. */
function recording(change: (channels: Channels, placeM: Float64Array) => Partial<Channels>, options = base) {
	const { channels, placeM, timeAt } = drive(circuit, options);
	const truth = [0, 1, 2, 3, 4].map((lap) => timeAt(lap * L));
	return { channels: { ...channels, xM: null, yM: null, ...change(channels, placeM) }, truth };
}

const lapOf = (placeM: Float64Array) => placeM.map((place) => Math.floor(place / L) + 1);
const withinLap = (placeM: Float64Array) => placeM.map((place) => place - Math.floor(place / L) * L);

function worstMs(channels: Channels, truth: number[], positions = false): number {
	const marks = findMarks(channels, positions ? freshPositions(channels) : null, null);
	expect(marks.crossingS).toHaveLength(truth.length);
	return Math.max(...truth.map((t, k) => Math.abs(marks.crossingS[k] - t))) * 1000;
}

describe('findMarks', () => {
	it('takes crossings from a lap distance to a fraction of a millisecond', () => {
		const { channels, truth } = recording((_, placeM) => ({
			lapColumn: lapOf(placeM),
			lapDistanceM: withinLap(placeM)
		}));
		expect(worstMs(channels, truth)).toBeLessThan(0.3);
	});

	it('does so without a lap column, and with a distance rounded to decimetres', () => {
		const { channels, truth } = recording((_, placeM) => ({
			lapDistanceM: withinLap(placeM).map((way) => Math.round(way * 10) / 10)
		}));
		expect(worstMs(channels, truth)).toBeLessThan(2);
	});

	it('reads a running lap time that restarts at the line', () => {
		const { timeAt } = drive(circuit, base);
		const { channels, truth } = recording(({ timeS }, placeM) => ({
			lapTimeColumnS: timeS.map((t, i) => {
				const lap = Math.floor(placeM[i] / L);
				return Math.round((lap < 0 ? t + 100 : t - timeAt(lap * L)) * 1000) / 1000;
			})
		}));
		expect(worstMs(channels, truth)).toBeLessThan(0.6);
	});

	it('fits one line through all marks where a lap column and positions are there', () => {
		const { channels, placeM, timeAt } = drive(circuit, base);
		const truth = [0, 1, 2, 3, 4].map((lap) => timeAt(lap * L));
		const marks = findMarks({ ...channels, lapColumn: lapOf(placeM) }, freshPositions(channels), null);
		const laps = truth.slice(1).map((t, k) => t - truth[k]);
		laps.forEach((lap, k) => expect(marks.crossingS[k + 1] - marks.crossingS[k]).toBeCloseTo(lap, 4));
	});

	it('spaces crossings evenly where a lap column stands alone and laps are equally long', () => {
		const { channels, truth } = recording((_, placeM) => ({ lapColumn: lapOf(placeM), distanceM: placeM }));
		expect(worstMs(channels, truth)).toBeLessThan(15);
	});

	it('takes the middle of the sample step where laps differ in length, and says how sure that is', () => {
		const { channels, truth } = recording((_, placeM) => ({
			lapColumn: lapOf(placeM),
			distanceM: placeM.map((place) => place + 9 * Math.sin(place / 900))
		}));
		const marks = findMarks(channels, null, null);
		expect(marks.plusMinusS).toBeCloseTo(0.025, 3);
		truth.forEach((t, k) => expect(Math.abs(marks.crossingS[k] - t)).toBeLessThanOrEqual(0.0251));
	});

	it('follows a lap column that changes late to the restart of the lap distance', () => {
		const { channels, truth } = recording((_, placeM) => ({
			lapColumn: lapOf(placeM.map((place) => place - 30)),
			lapDistanceM: withinLap(placeM)
		}));
		expect(worstMs(channels, truth)).toBeLessThan(0.3);
	});

	it('passes over a lap column that never changes, and says so', () => {
		const { channels, placeM } = drive(circuit, base);
		const marks = findMarks({ ...channels, lapColumn: placeM.map(() => 3) }, freshPositions(channels), null);
		expect(marks.source).toBe('chosenLine');
		expect(marks.warnings.map(({ code }) => code)).toEqual(['line_chosen', 'lap_column_unused']);
	});

	it('reads beacon pulses of any length', () => {
		const { channels, truth } = recording((_, placeM) => ({
			beacon: withinLap(placeM).map((way) => (way < 12 ? 1 : 0)),
			distanceM: placeM
		}));
		expect(worstMs(channels, truth)).toBeLessThan(15);
	});

	it('recognises a file that holds exactly one lap by its ends meeting', () => {
		const { channels } = drive(circuit, { ...base, fromLap: 0, toLap: 1, phase: 0.2 });
		const marks = findMarks({ ...channels, xM: null, yM: null, distanceMeasured: true }, null, null);
		expect(marks.source).toBe('wholeRun');
		expect(marks.crossingS).toHaveLength(2);
	});

	it('completes laps at both ends of a file that is cut at the line', () => {
		const { channels, placeM, timeAt } = drive(circuit, { ...base, fromLap: 0, toLap: 3 });
		const lapDistanceM = withinLap(placeM);
		const marks = findMarks({ ...channels, xM: null, yM: null, lapDistanceM }, null, null);
		expect(marks.crossingS).toHaveLength(4);
		expect(marks.crossingS[0]).toBeCloseTo(timeAt(0), 4);
		expect(marks.crossingS[3]).toBeCloseTo(timeAt(3 * L), 1);
	});

	it('cuts laps by their length where there is nothing but speed', () => {
		const { channels, truth } = recording(() => ({}));
		const marks = findMarks(channels, null, null);
		expect(marks.source).toBe('lapLength');
		const lap = truth[1] - truth[0];
		for (let k = 1; k < marks.crossingS.length; k++) {
			expect(Math.abs(marks.crossingS[k] - marks.crossingS[k - 1] - lap)).toBeLessThan(0.3);
		}
	});

	it('does not take the crossing of a figure of eight for a lap', () => {
		// two loops to opposite hands, joined by straights that cross at right angles where the run begins
		const loop = cornerElements(270, 60, 30);
		const reachM = symmetricCircuit(loop, 1).at(loop.reduce((sum, [length]) => sum + length, 0) - 1e-9).yM;
		const half = (hand: number) => [straight(reachM), ...cornerElements(hand * 270, 60, 30), straight(reachM)];
		const eight = symmetricCircuit([...half(1), ...half(-1)], 1);
		const { channels } = drive(eight, { rateHz: 20, fromLap: 0, toLap: 3.2, speedMps: () => 30 });
		const marks = findMarks(channels, freshPositions(channels), null);
		const laps = Array.from(marks.crossingS.subarray(1), (t, k) => t - marks.crossingS[k]);
		expect(laps).toHaveLength(3);
		laps.forEach((lap) => expect(lap).toBeCloseTo(eight.lengthM / 30, 2));
	});

	it('finds no mark in a run up a hill', () => {
		const { channels } = recording(() => ({}), { ...base, fromLap: 0, toLap: 0.6 });
		expect(findMarks(channels, null, null).crossingS).toHaveLength(0);
	});
});
