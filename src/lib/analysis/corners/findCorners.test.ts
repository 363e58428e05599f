import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Channels } from '../model.ts';
import { buildPath } from '../path/buildPath.ts';
import { cornerElements, drive, straight, symmetricCircuit } from '../path/testing/madeUpCircuit.ts';
import type { Drive, Element } from '../path/testing/madeUpCircuit.ts';
import { findCorners } from './findCorners.ts';

/** Corners of a circuit that repeats a pattern, found from a drive round it. */
function cornersOf(pattern: Element[], times: number, options: Partial<Drive> = {}, change: Partial<Channels> = {}) {
	const circuit = symmetricCircuit(pattern, times);
	const { channels, placeM } = drive(circuit, {
		rateHz: 50,
		fromLap: -0.1,
		toLap: 1.1,
		speedMps: () => 30,
		brakePct: () => 0,
		throttlePct: () => 100,
		...options
	});
	const lapColumn = placeM.map((place) => Math.floor(place / circuit.lengthM) + 1);
	const { placed } = buildPath({ ...channels, lapColumn, ...change });
	return { corners: findCorners(placed), lengthM: circuit.lengthM };
}

describe('findCorners', () => {
	it('finds start, apex and end of arcs with even transitions, whatever their radius, angle and hand', () => {
		const arcs = fc.record({
			radiusM: fc.integer({ min: 12, max: 120 }),
			angleDeg: fc.integer({ min: 50, max: 160 }),
			share: fc.double({ min: 0.15, max: 0.4, noNaN: true })
		});
		fc.assert(
			fc.property(arcs, fc.boolean(), ({ radiusM, angleDeg, share }, left) => {
				const arcM = (angleDeg * Math.PI * radiusM) / 180;
				const transitionM = Math.max(share * arcM, 6);
				const hand = left ? 1 : -1;
				// an opposite bend takes back what the corner turns too much
				const back = hand * angleDeg - 90;
				const pattern = [
					straight(150),
					...cornerElements(hand * angleDeg, radiusM, transitionM),
					straight(150),
					...(Math.abs(back) > 1
						? cornerElements(-back, 150, Math.min(20, (Math.abs(back) * Math.PI * 150) / 400))
						: [])
				];
				const speedMps = () => Math.sqrt(12 * radiusM);
				const { corners } = cornersOf(pattern, 4, { speedMps });
				const first = corners.find(({ apexM }) => Math.abs(apexM - (150 + (arcM + transitionM) / 2)) < 3);
				expect(first).toBeDefined();
				if (!first) return;
				expect(first.direction).toBe(left ? 'left' : 'right');
				expect(Math.abs(first.startM - 150)).toBeLessThan(2);
				expect(Math.abs(first.endM - 150 - arcM - transitionM)).toBeLessThan(2);
				expect(first.angleDeg).toBeCloseTo(angleDeg, -1);
				expect(Math.abs((first.minRadiusM ?? 0) / radiusM - 1)).toBeLessThan(0.08);
			}),
			{ seed: 17, numRuns: 12 }
		);
	});

	it('numbers corners by apex from the line and lets one span it', () => {
		const pattern = [straight(10), ...cornerElements(90, 40, 20), straight(300)];
		const circuit = symmetricCircuit(pattern, 4);
		const { channels, placeM } = drive(circuit, { rateHz: 50, fromLap: -0.2, toLap: 1.3, speedMps: () => 25 });
		const lapColumn = placeM.map((place) => Math.floor((place - 60) / circuit.lengthM) + 1);
		const corners = findCorners(buildPath({ ...channels, lapColumn }).placed);
		expect(corners.map(({ number }) => number)).toEqual([1, 2, 3, 4]);
		const across = corners[3];
		expect(across.startM).toBeGreaterThan(across.endM);
		expect(Math.round(across.endM)).toBe(Math.round(10 + (90 * Math.PI * 40) / 180 + 20 - 60));
	});

	it('meets neighbours of the other hand half-way', () => {
		const { corners } = cornersOf([straight(200), ...cornerElements(-60, 40, 20), ...cornerElements(150, 40, 20)], 4);
		expect(corners).toHaveLength(8);
		expect(corners[0].endM).toBeCloseTo(corners[1].startM, 0);
	});

	it('joins same-hand arcs with nearly nothing between and keeps both places', () => {
		const join = (gapM: number) =>
			cornersOf([straight(200), ...cornerElements(50, 40, 12), straight(gapM), ...cornerElements(40, 30, 12)], 4)
				.corners;
		// at 30 m/s half a second is 15 m
		expect(join(5)).toHaveLength(4);
		expect(join(5)[0].apex2M).not.toBeNull();
		expect(join(60)).toHaveLength(8);
	});

	it('keeps them apart where the car brakes for the second one', () => {
		const pattern = [straight(200), ...cornerElements(50, 40, 12), straight(10), ...cornerElements(40, 30, 12)];
		const period = symmetricCircuit(pattern, 4).lengthM / 4;
		const brakePct = (place: number) => {
			const into = place - Math.floor(place / period) * period;
			return (into > 170 && into < 200) || (into > 240 && into < 262) ? 60 : 0;
		};
		expect(cornersOf(pattern, 4, { brakePct }).corners).toHaveLength(8);
	});

	it('takes two peaks with a deep valley for two apexes of one corner', () => {
		const tight = 1 / 40;
		const pattern: Element[] = [
			straight(200),
			[20, 0, tight],
			[20, tight, tight],
			[12, tight, tight / 2],
			[14, tight / 2, tight / 2],
			[12, tight / 2, tight],
			[18.77, tight, tight],
			[20, tight, 0]
		];
		const { corners } = cornersOf(pattern, 3);
		expect(corners).toHaveLength(3);
		expect(corners[0].apexM).toBeCloseTo(230, -1);
		expect(corners[0].apex2M).toBeCloseTo(288, -1);
	});

	it('does not draw a corner out over a long gentle tail', () => {
		const pattern: Element[] = [
			straight(250),
			[20, 0, 1 / 35],
			[20, 1 / 35, 1 / 35],
			[20, 1 / 35, 1 / 500],
			[120, 1 / 500, 1 / 500],
			[30, 1 / 500, 0]
		];
		const turned = (20 / 2 / 35 + 20 / 35 + 10 / 35 + 10 / 500 + 120 / 500 + 15 / 500) * (180 / Math.PI);
		const { corners } = cornersOf([...pattern, straight(100), ...cornerElements(90 - turned, 200, 5)], 4);
		expect(corners[0].endM).toBeLessThan(320);
	});

	it('lists a gentle, flat bend as a kink without a number', () => {
		const pattern = [straight(200), ...cornerElements(-20, 700, 60), straight(200), ...cornerElements(110, 30, 15)];
		const speedMps = (place: number) => 24 + 0 * place;
		const { corners } = cornersOf(pattern, 4, { speedMps });
		expect(corners.map(({ number }) => number)).toEqual([null, 1, null, 2, null, 3, null, 4]);
		expect(corners[1].kind).toBe('flat');
	});

	it('numbers it where the car brakes or lifts for it', () => {
		const pattern = [straight(200), ...cornerElements(-20, 700, 60), straight(200), ...cornerElements(110, 30, 15)];
		const period = symmetricCircuit(pattern, 4).lengthM / 4;
		const throttlePct = (place: number) => {
			const into = place - Math.floor(place / period) * period;
			return into > 190 && into < 230 ? 40 : 100;
		};
		const { corners } = cornersOf(pattern, 4, { throttlePct });
		expect(corners.map(({ number }) => number)).toEqual([1, 2, 3, 4, 5, 6, 7, 8]);
		expect(corners[0].kind).toBe('lifted');
	});

	it('finds no corner in wobbles on a straight', () => {
		const offsetM = (place: number) => 0.4 * Math.sin(place / 9);
		const { corners } = cornersOf([straight(500), ...cornerElements(90, 40, 20)], 4, { offsetM });
		expect(corners).toHaveLength(4);
	});

	it('links corners less than two seconds apart without full throttle between them', () => {
		const pattern = [straight(250), ...cornerElements(-60, 30, 15), straight(20), ...cornerElements(150, 25, 12)];
		const off = cornersOf(pattern, 4, { throttlePct: () => 30 }).corners;
		expect(off[0].linkedTo).toBe(2);
		expect(off[1].linkedTo).toBeNull();
		// 20 m at full throttle last 0.67 s at 30 m/s, which still counts as linked; at 20 m/s a second does not
		expect(cornersOf(pattern, 4, { speedMps: () => 20 }).corners[0].linkedTo).toBeNull();
	});

	it('takes a circuit that never stops turning for one corner', () => {
		const circle: Element[] = [
			[60, 1 / 150, 1 / 90],
			[60, 1 / 90, 1 / 150],
			[1, 1 / 150, 1 / 150]
		];
		const turn = ((60 / 2) * (1 / 150 + 1 / 90) * 2 + 1 / 150) / (2 * Math.PI);
		const scaled = circle.map(([length, from, to]): Element => [length / turn / 3, from, to]);
		const { corners, lengthM } = cornersOf(scaled, 3);
		expect(corners).toHaveLength(1);
		expect(corners[0].angleDeg).toBeCloseTo(360, -1);
		expect(corners[0].apexM).toBeLessThan(lengthM);
	});

	it('finds corners from speed alone, without direction', () => {
		const pattern = [straight(300), ...cornerElements(90, 40, 20)];
		const period = symmetricCircuit(pattern, 4).lengthM / 4;
		const speedMps = (place: number) => 30 + 12 * Math.cos((2 * Math.PI * (place - 150)) / period);
		const { corners } = cornersOf(pattern, 4, { speedMps }, { xM: null, yM: null });
		expect(corners).toHaveLength(4);
		for (const corner of corners) expect(corner).toMatchObject({ direction: null, minRadiusM: null, angleDeg: null });
		expect(Math.abs(corners[0].apexM - 150 - period / 2)).toBeLessThan(3);
	});

	it('finds the same corners from noisy positions', () => {
		const pattern = [straight(200), ...cornerElements(-60, 40, 25), straight(90), ...cornerElements(150, 35, 25)];
		const { corners: clean, lengthM } = cornersOf(pattern, 4, { toLap: 4.1 });
		const apart = (a: number, b: number) => Math.abs(a - b - lengthM * Math.round((a - b) / lengthM));
		const noisy = cornersOf(pattern, 4, { toLap: 4.1, positionNoiseM: 0.3, speedNoiseKmh: 0.3 }).corners;
		expect(noisy).toHaveLength(clean.length);
		noisy.forEach((corner, k) => {
			expect(apart(corner.startM, clean[k].startM)).toBeLessThan(15);
			expect(apart(corner.endM, clean[k].endM)).toBeLessThan(15);
		});
	});
});
