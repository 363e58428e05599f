import { describe, expect, it } from 'vitest';
import { focusVerdict } from './focus.ts';

const told = (more: Partial<Parameters<typeof focusVerdict>[0]> = {}): string[] =>
	focusVerdict({
		met: 4,
		scored: 6,
		trend: null,
		paidS: null,
		metButSlower: 0,
		proposed: false,
		state: 'open',
		target: {
			kind: 'peak_brake',
			least: null,
			most: 75,
			base: 'value',
			scope: { dryOnly: false, afterLap: null, holdsOver: null },
			notSlower: true,
			text: ''
		},
		...more
	}).map((line) => line.replaceAll('\u00a0', ' '));

describe('focusVerdict', () => {
	it('says nothing before a lap was scored', () => {
		expect(told({ scored: 0 })).toEqual([]);
	});
	it.each([
		{
			paidS: { differenceS: -0.12, low: -0.2, high: -0.04 },
			says: 'It paid: laps that met it were 0.12 s quicker in the corner.'
		},
		{
			paidS: { differenceS: 0.12, low: 0.04, high: 0.2 },
			says: 'It has not paid: laps that met it were 0.12 s slower in the corner.'
		},
		{ paidS: { differenceS: -0.12, low: -0.3, high: 0.06 }, says: 'Whether it pays cannot be told yet.' }
	])('$says', ({ paidS, says }) => {
		expect(told({ paidS })).toContain(says);
	});
	it('flags laps that met it and were slower', () => {
		expect(told({ metButSlower: 1 })).toContain('1 lap met it but was slower than usual.');
	});
	it('proposes to close what holds', () => {
		expect(told({ proposed: true })).toContain('It holds: it may be closed.');
	});
});
