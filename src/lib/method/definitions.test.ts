import { describe, expect, it } from 'vitest';
import { DEFINITIONS } from './definitions.ts';

describe('DEFINITIONS', () => {
	const all = DEFINITIONS.flatMap((group) => group.definitions);

	it('defines each term once and each section under its own anchor', () => {
		expect(new Set(all.map(({ term }) => term)).size).toBe(all.length);
		expect(new Set(DEFINITIONS.map(({ id }) => id)).size).toBe(DEFINITIONS.length);
	});

	it('writes every meaning and limit as full sentences', () => {
		const texts = all.flatMap(({ meaning, limits }) => (limits === undefined ? [meaning] : [meaning, limits]));
		expect(texts.filter((text) => !/^[A-Z0-9].*\.$/s.test(text))).toEqual([]);
	});
});
