import { describe, expect, it } from 'vitest';
import type { ComparisonView, LapHead } from '$lib/schemas/views';
import { exampleComparison } from '$lib/view/example/exampleComparison';
import { compareKick, lapChoices, lapSwitch, otherLaps, referenceChoices } from './choices';

const example = exampleComparison();
const lap = (number: number, timeS: number, changes: Partial<LapHead> = {}): LapHead => ({
	...example.driver,
	id: `lap-${number}`,
	number,
	timeS,
	...changes
});
const view: ComparisonView = {
	...example,
	driver: lap(4, 99),
	runLaps: [lap(2, 101), lap(3, 98.5), lap(4, 99), lap(5, 98, { clean: false })]
};

describe('choices of laps', () => {
	it('say which lap is the best clean one and which the median', () => {
		expect(lapChoices(view).map(({ name, current }) => [name, current])).toEqual([
			['lap\u00a02', false],
			['lap\u00a03, the best', false],
			['lap\u00a04, the median', true],
			['lap\u00a05', false]
		]);
	});
	it('keep the reference where the lap changes, and the lap where the reference does', () => {
		expect(lapChoices(view)[0].href).toBe(`/compare/lap-2/${view.reference.id}`);
		expect(referenceChoices(view, {})[0].href).toBe(`/compare/lap-4/${view.reference.id}`);
	});
	it('never offer a lap against itself', () => {
		const own = { ...view, reference: view.runLaps[1] };
		expect(lapChoices(own).map(({ key }) => key)).not.toContain('lap-3');
		expect(referenceChoices({ ...view, otherReferences: [view.driver] }, {}).map(({ key }) => key)).toEqual([
			view.reference.id
		]);
	});
	it('put the present reference first, and say so', () => {
		const others = { ...view, otherReferences: [lap(9, 97, { driver: example.reference.driver })] };
		expect(referenceChoices(others, {}).map(({ current }) => current)).toEqual([true, false]);
	});
});

describe('the place of a page', () => {
	it('is kept where the lap or the reference changes', () => {
		expect(lapChoices(view, '/4?view=table')[0].href).toBe(`/compare/lap-2/${view.reference.id}/4?view=table`);
		expect(referenceChoices(view, {}, '?order=lap')[0].href).toBe(`/compare/lap-4/${view.reference.id}?order=lap`);
	});
});

describe('lapSwitch', () => {
	it('leads from the best clean lap to the median one and back', () => {
		expect(lapSwitch(view)).toEqual([
			{ value: 'lap-3', label: 'best lap', href: `/compare/lap-3/${view.reference.id}` },
			{ value: 'lap-4', label: 'median lap', href: `/compare/lap-4/${view.reference.id}` }
		]);
	});
	it('is not there for two clean laps, nor where it would lay a lap on itself', () => {
		expect(lapSwitch({ ...view, runLaps: view.runLaps.slice(0, 2) })).toBeNull();
		expect(lapSwitch({ ...view, reference: view.runLaps[1] })).toBeNull();
	});
});

describe('otherLaps', () => {
	it('are the clean ones beside the pair, in lap order', () => {
		expect(otherLaps(view)).toEqual([
			{ id: 'lap-2', number: 2 },
			{ id: 'lap-3', number: 3 }
		]);
	});
	it('are the quickest where there are many', () => {
		const runLaps = Array.from({ length: 40 }, (_, i) => lap(i + 1, 140 - i));
		expect(otherLaps({ ...view, runLaps }).map(({ number }) => number)).toEqual([
			29, 30, 31, 32, 33, 34, 35, 36, 37, 38, 39, 40
		]);
	});
});

describe('compareKick', () => {
	it('says where the driver’s lap was driven, and leaves out what is not known', () => {
		const now = new Date('2026-06-01T00:00:00Z');
		expect(compareKick(view, { now })).toBe('Vallmere Park, grand prix · 3\u00a0621\u00a0m · Brindle GT · 14\u00a0May');
		expect(compareKick({ ...view, driver: { ...view.driver, car: null, startedAt: null } }, {})).toBe(
			'Vallmere Park, grand prix · 3\u00a0621\u00a0m'
		);
	});
});
