import { describe, expect, it } from 'vitest';
import { momentFromField, momentInField } from './moments.ts';

describe('moments in fields', () => {
	it.each([
		['2026-05-14T16:05:33.120Z', '2026-05-14T16:05'],
		['2026-05-14T18:05:00+02:00', '2026-05-14T16:05'],
		[null, '']
	])('writes %s as %s', (instant, field) => {
		expect(momentInField(instant)).toBe(field);
	});

	it.each([
		['2026-05-14T16:05', '2026-05-14T16:05:00.000Z'],
		['', null],
		['tomorrow', null]
	])('reads %s as %s', (field, instant) => {
		expect(momentFromField(field)).toBe(instant);
	});
});
