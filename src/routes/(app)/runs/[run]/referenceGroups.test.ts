import { describe, expect, it } from 'vitest';
import { run } from '../../../(dev)/pages-gallery/examples.ts';
import { referenceGroups } from './referenceGroups.ts';

describe('referenceGroups', () => {
	const dates = { now: new Date('2026-06-01T00:00:00Z') };
	const shown = (groups: ReturnType<typeof referenceGroups>) =>
		groups.map(({ label, options }) => [label, ...options.map((option) => option.label.replaceAll('\u00a0', ' '))]);

	it('puts the shelf first and the own run last, and leaves out what is empty', () => {
		expect(shown(referenceGroups({ ...run, laps: run.laps.slice(4, 7) }, dates))).toEqual([
			['On the shelf', 'Rhea, May, 1:37.663, 3 May, Brindle GT, dry'],
			['Your other runs', 'lap 5, 1:38.560, 3 May, Brindle GT, dry'],
			['This run', 'lap 5, 1:38.104', 'lap 6, 1:38.947', 'lap 7, 1:44.390, not clean']
		]);
	});

	it('names the driver of a shared lap', () => {
		const [shelf] = run.references;
		const shared = { ...shelf, shelfName: null, startedAt: null, conditions: 'unknown' as const };
		expect(shown(referenceGroups({ ...run, laps: [], references: [shared] }, dates))).toEqual([
			['Shared with you', 'Rhea Calloway, 1:37.663, Brindle GT']
		]);
	});
});
