import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { gridLap } from '../laps/gridLap.ts';
import type { Channels, PlacedRun } from '../model.ts';
import { median } from '../stats/quantile.ts';
import { timeAtPlace } from '../trace/placeTime.ts';
import { KerbnoteError } from '../../schemas/kerbnoteError.ts';
import { buildPath } from './buildPath.ts';
import { placeRun } from './placeRun.ts';
import { cornerElements, drive, straight, symmetricCircuit } from './testing/madeUpCircuit.ts';
import type { Drive } from './testing/madeUpCircuit.ts';

const circuit = symmetricCircuit(
	[straight(180), ...cornerElements(-70, 35, 20), straight(60), ...cornerElements(160, 22, 14)],
	4
);
const L = circuit.lengthM;
const speedMps = (place: number) => 28 + 9 * Math.cos((8 * Math.PI * place) / L);
const base: Drive = { rateHz: 50, fromLap: -0.1, toLap: 2.1, speedMps };
const lapsOf = (placeM: Float64Array) => placeM.map((place) => Math.floor(place / L) + 1);

function recorded(options: Partial<Drive> = {}) {
	const { channels, placeM, timeAt } = drive(circuit, { ...base, ...options });
	return { channels: { ...channels, lapColumn: lapsOf(placeM) }, placeM, timeAt };
}

const reference = buildPath(recorded().channels);

/** How far a path's line lies behind the true one: a lap column says only at which sample it is crossed. */
function lineOf({ placed }: { placed: PlacedRun }, placeM: Float64Array): number {
	return median(placed.placeM.map((place, i) => (place * L) / placed.path.lengthM - placeM[i]));
}
const lineM = lineOf(reference, recorded().placeM);

/** Largest error of the time since the line at places round the first lap, ms. */
function worstMs(placed: PlacedRun, timeAt: (placeM: number) => number, behindM = lineM): number {
	const scale = placed.path.lengthM / L;
	let worst = 0;
	for (let s = 5; s < L - 5; s += 5) {
		const found = timeAtPlace(placed, s * scale) - timeAtPlace(placed, 0);
		worst = Math.max(worst, Math.abs(found - (timeAt(s - behindM) - timeAt(-behindM))) * 1000);
	}
	return worst;
}

describe('buildPath', () => {
	it('draws the circuit at its length, closed, with its curvature', () => {
		const { path } = reference;
		expect(path.closed).toBe(true);
		expect(Math.abs(path.lengthM / L - 1)).toBeLessThan(2e-4);
		expect(path.xM).toHaveLength(Math.floor(path.lengthM) + 1);
		const tightest = Math.max(...path.curvaturePerM.map(Math.abs));
		expect(1 / tightest).toBeGreaterThan(21);
		expect(1 / tightest).toBeLessThan(22.5);
	});

	it('does not depend on where, in which direction or when the run was sampled', () => {
		const whole = fc.record({
			turnRad: fc.double({ min: -3, max: 3, noNaN: true }),
			x: fc.double({ min: -2000, max: 2000, noNaN: true }),
			y: fc.double({ min: -2000, max: 2000, noNaN: true }),
			phase: fc.double({ min: 0, max: 0.99, noNaN: true })
		});
		fc.assert(
			fc.property(whole, ({ turnRad, x, y, phase }) => {
				const { channels, placeM, timeAt } = recorded({ turnRad, moveM: [x, y], phase });
				const { path, placed } = buildPath(channels);
				const behindM = lineOf({ placed }, placeM);
				expect(path.lengthM).toBeCloseTo(reference.path.lengthM, 1);
				for (let s = 0; s < L; s += 7) {
					const [own, other] = [path, reference.path].map(({ curvaturePerM }, k) => {
						const at = s + (k === 0 ? behindM : lineM);
						return curvaturePerM[Math.round(at < 0 ? at + L : at) % curvaturePerM.length];
					});
					expect(Math.abs(own - other)).toBeLessThan(3e-3);
				}
				expect(worstMs(placed, timeAt, behindM)).toBeLessThan(0.5);
			}),
			{ seed: 31, numRuns: 12 }
		);
	});

	it('leaves an hour’s columns as they were', () => {
		const { channels } = recorded();
		const copy = structuredClone(channels);
		buildPath(channels);
		expect(channels).toEqual(copy);
	});
});

describe('placeRun', () => {
	it('gives places that never fall, and laps that begin at whole turns', () => {
		const { placed } = placeRun(
			recorded({ seed: 2, positionNoiseM: 0.3, speedNoiseKmh: 0.3 }).channels,
			reference.path
		);
		for (let i = 1; i < placed.placeM.length; i++)
			expect(placed.placeM[i]).toBeGreaterThanOrEqual(placed.placeM[i - 1]);
		for (const lap of placed.laps) {
			if (lap.turn === null) continue;
			expect(timeAtPlace(placed, lap.turn * reference.path.lengthM)).toBe(lap.startS);
		}
	});

	it('has no delta between a lap and itself', () => {
		const grid = gridLap(reference.placed, reference.placed.laps[1]);
		const again = gridLap(placeRun(recorded().channels, reference.path).placed, reference.placed.laps[1]);
		grid.timeS.forEach((t, i) => {
			if (!Number.isNaN(t)) expect(again.timeS[i]).toBeCloseTo(t, 9);
		});
	});

	it.each([
		{ name: 'the same line', options: {}, barMs: 0.5 },
		{ name: '10 Hz', options: { rateHz: 10 }, barMs: 2 },
		{ name: 'a line 2.5 m beside', options: { offsetM: (place: number) => 2.5 * Math.sin(place / 90) }, barMs: 1 },
		{ name: 'a line 5 m beside', options: { offsetM: () => -5 }, barMs: 1 },
		{ name: '0.3 m of noise', options: { positionNoiseM: 0.3, speedNoiseKmh: 0.3, rateHz: 60 }, barMs: 20 },
		{ name: '1 m of noise at 10 Hz', options: { positionNoiseM: 1, speedNoiseKmh: 0.5, rateHz: 10 }, barMs: 60 }
	])('knows the time at each place on $name within $barMs ms', ({ options, barMs }) => {
		const { channels, timeAt } = recorded(options);
		expect(worstMs(placeRun(channels, reference.path).placed, timeAt)).toBeLessThan(barMs);
	});

	it('places a receiver that is slower than the file', () => {
		const { channels, timeAt } = recorded({ rateHz: 100 });
		const held = (column: Float64Array | null) => column && column.map((_, i) => column[i - (i % 10)]);
		const slow: Channels = { ...channels, xM: held(channels.xM), yM: held(channels.yM) };
		expect(worstMs(placeRun(slow, reference.path).placed, timeAt)).toBeLessThan(3);
	});

	it('bridges a drop-out of the positions by the speed', () => {
		const { channels, placeM, timeAt } = recorded();
		const gone = (column: Float64Array | null) =>
			column && column.map((value, i) => (placeM[i] > 300 && placeM[i] < 380 ? NaN : value));
		const patchy: Channels = { ...channels, xM: gone(channels.xM), yM: gone(channels.yM) };
		expect(worstMs(placeRun(patchy, reference.path).placed, timeAt)).toBeLessThan(5);
	});

	it('does not make laps out of a pause in the recording', () => {
		const { channels, placeM } = recorded({ toLap: 4.1 });
		const keep = Array.from(placeM.keys()).filter((i) => placeM[i] < 1.4 * L || placeM[i] > 1.7 * L);
		const cut = (values: unknown) =>
			values instanceof Float64Array ? Float64Array.from(keep, (i) => values[i]) : values;
		const paused = Object.fromEntries(
			Object.entries(channels).map(([name, values]) => [name, cut(values)])
		) as typeof channels;
		const resumed = { ...paused, timeS: paused.timeS.map((t, k) => (placeM[keep[k]] > 1.5 * L ? t + 300 : t)) };
		const timed = placeRun(resumed, reference.path).placed.laps.filter(({ kind }) => kind === 'timed');
		expect(timed).toHaveLength(4);
		expect(timed.map(({ clean }) => clean)).toEqual([true, false, true, true]);
		expect(timed[1].reasons).toContain('drop_out');
	});

	it('does not gain a lap by positions that are elsewhere on the circuit for some seconds', () => {
		const { channels, placeM } = recorded({ toLap: 4.1 });
		const away = (column: Float64Array) =>
			column.map((value, i) => (placeM[i] > 1.4 * L && placeM[i] < 1.5 * L ? column[Math.max(i - 900, 0)] : value));
		const lost = { ...channels, xM: away(channels.xM ?? placeM), yM: away(channels.yM ?? placeM) };
		const timed = placeRun(lost, reference.path).placed.laps.filter(({ kind }) => kind === 'timed');
		expect(timed).toHaveLength(4);
	});

	it('takes a shift of the whole recording for the receiver’s, not for a line', () => {
		const { channels, timeAt } = recorded({ moveM: [1.6, -1.2] });
		const { placed } = placeRun(channels, reference.path);
		expect(worstMs(placed, timeAt)).toBeLessThan(4);
		expect(Math.max(...(placed.offsetM ?? []).map(Math.abs))).toBeLessThan(0.3);
	});

	it('cuts laps at the path’s line, wherever the file’s own marks are', () => {
		const { channels, placeM, timeAt } = recorded();
		const elsewhere = { ...channels, lapColumn: lapsOf(placeM.map((place) => place + 200)) };
		const { placed } = placeRun(elsewhere, reference.path);
		const timed = placed.laps.filter(({ kind }) => kind === 'timed');
		expect(timed.map(({ endS, startS }) => endS - startS)[0]).toBeCloseTo(timeAt(L) - timeAt(0), 3);
	});

	it('refuses a run that goes round the other way, and one from elsewhere', () => {
		const { channels } = recorded();
		const reversed = (column: Float64Array) => column.slice().reverse();
		const backwards: Channels = {
			...channels,
			xM: reversed(channels.xM ?? new Float64Array(0)),
			yM: reversed(channels.yM ?? new Float64Array(0)),
			speedKmh: reversed(channels.speedKmh),
			lapColumn: null
		};
		const elsewhere = recorded({ moveM: [5000, 0] }).channels;
		for (const run of [backwards, elsewhere]) {
			expect(() => placeRun(run, reference.path)).toThrow(KerbnoteError);
			expect(() => placeRun(run, reference.path)).toThrow(expect.objectContaining({ code: 'reference_mismatch' }));
		}
	});

	it('places by distance and speed where there are no positions', () => {
		const { channels, timeAt } = recorded({ toLap: 3.1 });
		const blind: Channels = { ...channels, xM: null, yM: null };
		expect(worstMs(placeRun(blind, reference.path).placed, timeAt)).toBeLessThan(30);
	});

	it('refuses a run without positions whose laps are too long for the path', () => {
		const { channels } = recorded({ toLap: 3.1 });
		const longer = { ...channels, xM: null, yM: null, distanceM: channels.distanceM.map((way) => way * 1.1) };
		expect(() => placeRun(longer, reference.path)).toThrow(expect.objectContaining({ code: 'reference_mismatch' }));
	});

	it('counts along the track where both files do, so that lines at an angle cost nothing', () => {
		const along = (channels: Channels, placeM: Float64Array): Channels => ({
			...channels,
			lapDistanceM: placeM.map((place) => Math.round((place - Math.floor(place / L) * L) * 100) / 100)
		});
		const weave = { offsetM: (place: number) => 3 * Math.sin(place / 30) };
		const own = recorded(weave);
		const woven = buildPath(along(own.channels, own.placeM));
		const other = recorded({ toLap: 3.1 });
		const error = (run: PlacedRun) => {
			let worst = 0;
			own.placeM.forEach((place, i) => {
				if (place < 5 || place > L - 5) return;
				const found = timeAtPlace(run, woven.placed.placeM[i]) - timeAtPlace(run, 0);
				worst = Math.max(worst, Math.abs(found - (other.timeAt(place) - other.timeAt(0))) * 1000);
			});
			return worst;
		};
		const { placed } = placeRun(along(other.channels, other.placeM), woven.path);
		const byProjection = placeRun(other.channels, woven.path).placed;
		expect(error(placed)).toBeLessThan(1);
		expect(error(byProjection)).toBeGreaterThan(5);
	});
});
