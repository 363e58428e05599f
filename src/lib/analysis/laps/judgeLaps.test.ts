import { describe, expect, it } from 'vitest';
import { buildPath } from '../path/buildPath.ts';
import { cornerElements, drive, straight, symmetricCircuit } from '../path/testing/madeUpCircuit.ts';
import type { Drive } from '../path/testing/madeUpCircuit.ts';
import type { Channels } from '../model.ts';

const circuit = symmetricCircuit([straight(250), ...cornerElements(90, 40, 20)], 4);
const L = circuit.lengthM;
const flying: Drive = { rateHz: 20, fromLap: -0.2, toLap: 5.2, speedMps: () => 30 };

function laps(
	options: Partial<Drive>,
	change: (channels: Channels, placeM: Float64Array) => Partial<Channels> = () => ({})
) {
	const { channels, placeM } = drive(circuit, { ...flying, ...options });
	const lapColumn = placeM.map((place) => Math.floor(place / L) + 1);
	return buildPath({ ...channels, lapColumn, ...change(channels, placeM) });
}

/** Speed that is changed on a stretch of places. */
const slower = (fromM: number, toM: number, mps: number) => (place: number) =>
	place > fromM && place < toM ? mps : 30;

describe('judgeLaps', () => {
	it('calls laps clean that nothing is wrong with, and keeps the file’s own numbers', () => {
		const found = laps({}).laps;
		expect(found.map(({ number, kind, clean }) => [number, kind, clean])).toEqual([
			[0, 'partial', false],
			[1, 'timed', true],
			[2, 'timed', true],
			[3, 'timed', true],
			[4, 'timed', true],
			[5, 'timed', true],
			[6, 'partial', false]
		]);
		expect(found.slice(1, 6).map(({ turn }) => turn)).toEqual([0, 1, 2, 3, 4]);
	});

	it('counts laps where the file’s numbers are not unique', () => {
		const found = laps({}, (_, placeM) => ({ lapColumn: placeM.map((place) => Math.floor(place / L) % 2) })).laps;
		expect(found.map(({ number }) => number)).toEqual([0, 1, 2, 3, 4, 5, 6]);
	});

	it('marks a stop, and not the slow time that it costs as a slow phase', () => {
		const found = laps({ speedMps: slower(2.3 * L, 2.3 * L + 1, 0.3) }).laps;
		expect(found[3].reasons).toEqual(expect.arrayContaining(['stopped']));
		expect(found[3].reasons).not.toContain('neutralised');
		expect(found[3].clean).toBe(false);
		expect(found[2].clean).toBe(true);
	});

	it('marks a slow phase', () => {
		const { laps: found } = laps({ speedMps: slower(2.2 * L, 2.6 * L, 16) });
		expect(found[3].reasons).toEqual(['neutralised', 'slow']);
	});

	it('keeps a lap of 106 % and puts out one of 108 %', () => {
		const { laps: found } = laps({
			speedMps: (place) => 30 / (place > 4 * L ? 1.08 : place > 3 * L && place < 4 * L ? 1.06 : 1)
		});
		expect(found[4].clean).toBe(true);
		expect(found[5].reasons).toEqual(['slow']);
	});

	it('marks a drop-out of over half a second, and none of less', () => {
		const without = (channels: Channels, from: number, to: number) => {
			const keep = Array.from(channels.timeS.keys()).filter((i) => channels.timeS[i] < from || channels.timeS[i] > to);
			const pick = (column: Float64Array | null) => column && Float64Array.from(keep, (i) => column[i]);
			return Object.fromEntries(
				Object.entries(channels).map(([name, value]) => [name, value instanceof Float64Array ? pick(value) : value])
			) as Partial<Channels>;
		};
		const { channels } = drive(circuit, flying);
		const lap = L / 30;
		const cut = (lengthS: number) =>
			buildPath({ ...channels, ...without(channels, 2.5 * lap, 2.5 * lap + lengthS) }).laps.filter(({ clean }) => clean)
				.length;
		expect(cut(0.3)).toBe(cut(0));
		expect(cut(0.9)).toBe(cut(0) - 1);
	});

	it('marks a lap that leaves the path by over 10 m for a second', () => {
		const wide = (depth: number) => (place: number) =>
			Math.abs(place - 2.5 * L) < 60 ? depth * Math.cos(((place - 2.5 * L) / 60) * (Math.PI / 2)) ** 2 : 0;
		expect(laps({ offsetM: wide(18) }).laps[3].reasons).toContain('off_path');
		expect(laps({ offsetM: wide(6) }).laps[3].clean).toBe(true);
	});

	it('marks a standing start, and the lap before it as an out lap', () => {
		const { laps: found } = laps({
			fromLap: -0.02,
			speedMps: (place) => Math.min(30, Math.sqrt(0.04 + 2 * 4 * Math.max(place + 0.02 * L, 0)))
		});
		expect(found[0].kind).toBe('out');
		expect(found[1].reasons).toContain('standing_start');
		expect(found[2].clean).toBe(true);
	});

	it('lets a passage through the pit lane end an in lap and open an out lap', () => {
		const pits = (place: number) => Math.exp(-(((place - 2 * L) / 50) ** 4)) * -18;
		const { laps: found } = laps({ offsetM: pits, speedMps: slower(2 * L - 60, 2 * L + 60, 14) });
		expect(found.map(({ kind }) => kind)).toEqual(['partial', 'timed', 'in', 'out', 'timed', 'timed', 'partial']);
	});

	it('says that no lap is complete, and that none is clean', () => {
		const half = laps({ fromLap: 0.1, toLap: 0.8 });
		expect(half.laps).toHaveLength(1);
		expect(half.laps[0]).toMatchObject({ kind: 'partial', reasons: ['partial'] });
		expect(half.warnings.map(({ code }) => code)).toContain('no_complete_lap');
		const stopped = laps({ toLap: 1.1, speedMps: slower(0.4 * L, 0.4 * L + 1, 0.3) });
		expect(stopped.warnings.map(({ code }) => code)).toContain('no_clean_lap');
	});
});
