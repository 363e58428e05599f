import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { CornerEdit, MapCorner } from '../../schemas/cornerMap.ts';
import { cellsDiffer, changesOf } from './compareMaps.ts';
import { cutCells } from './cutCells.ts';
import { editCornerMap, type MapPath } from './editCornerMap.ts';

const LENGTH_M = 1000;
/** a straight, a left of 90° at 100–200 m, a right of 60° at 300–360 m, a slight left at 600 m, and a left across the line */
const bends = [
	{ fromM: 100, toM: 200, turn: Math.PI / 2 },
	{ fromM: 300, toM: 360, turn: -Math.PI / 3 },
	{ fromM: 600, toM: 650, turn: 0.3 },
	{ fromM: 950, toM: 1040, turn: Math.PI / 2 }
];
const path: MapPath = {
	lengthM: LENGTH_M,
	closed: true,
	curvaturePerM: Float64Array.from({ length: LENGTH_M }, (_, s) => {
		const bend = bends.find(({ fromM, toM }) => [s, s + LENGTH_M].some((at) => at >= fromM && at < toM));
		return bend ? bend.turn / (bend.toM - bend.fromM) : 0;
	}),
	speedKmh: new Float64Array(LENGTH_M).fill(108)
};

function corner(id: string, startM: number, apexM: number, endM: number, more: Partial<MapCorner> = {}): MapCorner {
	return {
		id,
		name: null,
		number: 1,
		startM,
		apexM,
		apex2M: null,
		endM,
		direction: 'left',
		minRadiusM: 60,
		angleDeg: 90,
		linkedTo: null,
		kind: 'braked',
		...more
	};
}
const map: MapCorner[] = [
	corner('a', 100, 150, 200, { number: 1, name: 'Fernside', linkedTo: 2 }),
	corner('b', 300, 330, 360, { number: 2, direction: 'right' }),
	corner('k', 600, 625, 650, { number: null, kind: 'flat' }),
	corner('c', 950, 990, 40, { number: 3 })
];

function edited(...edits: CornerEdit[]): MapCorner[] {
	let made = 0;
	const result = editCornerMap(map, edits, path, () => `new${++made}`);
	if ('refusal' in result) throw new Error(result.refusal.message);
	return result.corners;
}
const numbers = (corners: readonly MapCorner[]) => corners.map(({ id, number }) => [id, number]);

describe('editCornerMap', () => {
	it('splits a corner: the part with the apex keeps id and name, the rest of the lap is numbered on', () => {
		const corners = edited({ kind: 'split', corner: 'a', atM: 160 });
		expect(numbers(corners)).toEqual([
			['a', 1],
			['new1', 2],
			['b', 3],
			['k', null],
			['c', 4]
		]);
		const [first, second] = corners;
		expect(first).toMatchObject({ startM: 100, endM: 160, apexM: 150, name: 'Fernside', linkedTo: 2 });
		expect(second).toMatchObject({ startM: 160, endM: 200, name: null, direction: 'left' });
		expect(first.angleDeg).toBeCloseTo(54, 6);
		expect(second.angleDeg).toBeCloseTo(36, 6);
	});

	it('gives both halves of a double apex the apex that is theirs', () => {
		const double = map.map((one) => (one.id === 'a' ? { ...one, apexM: 120, apex2M: 180 } : one));
		const result = editCornerMap(double, [{ kind: 'split', corner: 'a', atM: 150 }], path, () => 'n');
		expect('corners' in result && result.corners.slice(0, 2).map(({ apexM, apex2M }) => [apexM, apex2M])).toEqual([
			[120, null],
			[180, null]
		]);
	});

	it('merges neighbours into the first', () => {
		const corners = edited({ kind: 'merge', first: 'a', second: 'b' });
		expect(numbers(corners)).toEqual([
			['a', 1],
			['k', null],
			['c', 2]
		]);
		expect(corners[0]).toMatchObject({ startM: 100, endM: 360, direction: 'left', apexM: 150 });
	});

	it('merges across the line, and takes in a kink', () => {
		const across = edited({ kind: 'merge', first: 'c', second: 'a' });
		expect(across.find(({ id }) => id === 'c')).toMatchObject({ startM: 950, endM: 200, apex2M: 150, number: 2 });
		const kinked = edited({ kind: 'merge', first: 'b', second: 'k' });
		expect(kinked.map(({ id }) => id)).toEqual(['a', 'b', 'c']);
	});

	it('undoes a split by merging, but for the new corner', () => {
		const corners = edited({ kind: 'split', corner: 'b', atM: 335 }, { kind: 'merge', first: 'b', second: 'new1' });
		expect(corners.map(({ id, startM, endM, number }) => [id, startM, endM, number])).toEqual(
			map.map(({ id, startM, endM, number }) => [id, startM, endM, number])
		);
		expect(corners[1].apexM).toBe(330);
	});

	it('moves places and measures hand, angle and radius anew', () => {
		const [first] = edited({ kind: 'move', corner: 'a', endM: 150, apexM: 130 });
		expect(first).toMatchObject({ startM: 100, apexM: 130, endM: 150 });
		expect(first.angleDeg).toBeCloseTo(45, 6);
		expect(first.minRadiusM).toBeCloseTo(100 / (Math.PI / 2), 6);
	});

	it('numbers a kink and takes the number of a corner away; linked corners stay linked', () => {
		const corners = edited({ kind: 'number', corner: 'k' });
		expect(numbers(corners)).toEqual([
			['a', 1],
			['b', 2],
			['k', 3],
			['c', 4]
		]);
		expect(corners[0].linkedTo).toBe(2);
		expect(corners[1].linkedTo).toBeNull();
		const fewer = edited({ kind: 'unnumber', corner: 'b' });
		expect(numbers(fewer)).toEqual([
			['a', 1],
			['b', null],
			['k', null],
			['c', 2]
		]);
		expect(fewer[0].linkedTo).toBeNull();
	});

	it('names a corner and changes nothing else', () => {
		expect(edited({ kind: 'name', corner: 'b', name: 'Mill' })).toEqual(
			map.map((one) => (one.id === 'b' ? { ...one, name: 'Mill' } : one))
		);
	});

	it.each<{ name: string; edit: CornerEdit; code: string }>([
		{ name: 'a corner that is not there', edit: { kind: 'unnumber', corner: 'x' }, code: 'unknown_corner' },
		{ name: 'a split outside', edit: { kind: 'split', corner: 'a', atM: 250 }, code: 'outside' },
		{ name: 'a split at the border', edit: { kind: 'split', corner: 'a', atM: 101 }, code: 'outside' },
		{ name: 'a merge backwards', edit: { kind: 'merge', first: 'b', second: 'a' }, code: 'not_neighbours' },
		{ name: 'a merge with itself', edit: { kind: 'merge', first: 'b', second: 'b' }, code: 'not_neighbours' },
		{ name: 'a start behind the apex', edit: { kind: 'move', corner: 'a', startM: 170 }, code: 'out_of_order' },
		{ name: 'an end in the next corner', edit: { kind: 'move', corner: 'a', endM: 310 }, code: 'overlaps' },
		{ name: 'a start in the last corner', edit: { kind: 'move', corner: 'a', startM: 20 }, code: 'overlaps' },
		{ name: 'a place beyond the lap', edit: { kind: 'move', corner: 'a', endM: 1200 }, code: 'outside' },
		{ name: 'a number for a corner', edit: { kind: 'number', corner: 'a' }, code: 'already_so' },
		{ name: 'no number for a kink', edit: { kind: 'unnumber', corner: 'k' }, code: 'already_so' }
	])('refuses $name and says which step', ({ edit, code }) => {
		const name: CornerEdit = { kind: 'name', corner: 'a', name: 'One' };
		expect(editCornerMap(map, [name, edit], path, () => 'n')).toMatchObject({ refusal: { step: 1, code } });
	});

	it('keeps ids unique, numbers complete and places in order, whatever is done to it; the map given stays as it was', () => {
		const before = structuredClone(map);
		const step = fc.oneof(
			fc.record({
				kind: fc.constant('split' as const),
				corner: fc.constantFrom('a', 'b', 'c', 'n1'),
				atM: fc.integer({ min: 0, max: 999 })
			}),
			fc.record({
				kind: fc.constant('merge' as const),
				first: fc.constantFrom('a', 'b', 'c'),
				second: fc.constantFrom('a', 'b', 'c', 'n1')
			}),
			fc.record({ kind: fc.constant('number' as const), corner: fc.constantFrom('a', 'k') }),
			fc.record({ kind: fc.constant('unnumber' as const), corner: fc.constantFrom('a', 'b', 'k') }),
			fc.record({
				kind: fc.constant('move' as const),
				corner: fc.constantFrom('a', 'b', 'c', 'k'),
				endM: fc.integer({ min: 0, max: 999 })
			})
		);
		fc.assert(
			fc.property(fc.array(step, { maxLength: 6 }), (steps) => {
				let made = 0;
				let now = map;
				for (const one of steps) {
					const result = editCornerMap(now, [one], path, () => `n${++made}`);
					if ('corners' in result) now = result.corners;
				}
				expect(new Set(now.map(({ id }) => id)).size).toBe(now.length);
				const numbered = now.flatMap(({ number }) => (number === null ? [] : [number]));
				expect(numbered).toEqual(numbered.map((_, i) => i + 1));
				for (const { startM, apexM, endM } of now) {
					const way = (place: number) => (place - startM + LENGTH_M) % LENGTH_M;
					expect(way(apexM)).toBeLessThanOrEqual(way(endM));
				}
				expect(cutCells(now, LENGTH_M, new Map()).flatMap(({ corners }) => corners)).toEqual(numbered);
			}),
			{ seed: 4, numRuns: 300 }
		);
		expect(map).toEqual(before);
	});
});

describe('changesOf', () => {
	it('says what is new, what is renumbered, and whose numbers are measured anew', () => {
		const changes = changesOf(map, edited({ kind: 'split', corner: 'b', atM: 335 }));
		const of = (id: string) => changes.find((change) => change.id === id);
		expect(of('new1')).toMatchObject({ before: null, remeasured: true });
		expect(of('c')).toMatchObject({ before: { number: 3 }, after: { number: 4 }, remeasured: true });
		expect(of('a')).toMatchObject({ remeasured: true });
		expect(of('k')).toBeUndefined();
	});

	it('names only what was renamed', () => {
		const changes = changesOf(map, edited({ kind: 'name', corner: 'b', name: 'Mill' }));
		expect(changes.map(({ id, remeasured }) => [id, remeasured])).toEqual([['b', false]]);
	});

	it('sees cells move', () => {
		const cells = (corners: MapCorner[]) => cutCells(corners, LENGTH_M, new Map());
		expect(cellsDiffer(cells(map), cells(map))).toBe(false);
		expect(cellsDiffer(cells(map), cells(edited({ kind: 'unnumber', corner: 'c' })))).toBe(true);
	});
});
