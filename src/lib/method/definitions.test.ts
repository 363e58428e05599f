import { describe, expect, it } from 'vitest';
import { DRILLS } from '../analysis/findings/drills.ts';
import { findingCodeSchema } from '../schemas/codes.ts';
import { FINDING_MEANINGS } from './findingDefinitions.ts';
import { DEFINITIONS } from './definitions.ts';

describe('DEFINITIONS', () => {
	const all = DEFINITIONS.flatMap((group) => group.definitions);

	it('defines each term once and each section under its own anchor', () => {
		expect(new Set(all.map(({ term }) => term)).size).toBe(all.length);
		expect(new Set(DEFINITIONS.map(({ id }) => id)).size).toBe(DEFINITIONS.length);
	});

	it('defines every finding, by the same limits and exercises that it is judged and drafted by', () => {
		const group = DEFINITIONS.find(({ id }) => id === 'findings');
		expect(group?.definitions).toHaveLength(findingCodeSchema.options.length);
		for (const [i, code] of findingCodeSchema.options.entries()) {
			const { meaning, term } = group?.definitions[i] ?? { meaning: '', term: '' };
			expect(term).toBe(FINDING_MEANINGS[code].term);
			expect(meaning.includes('Exercise: ')).toBe(DRILLS[code] !== null);
		}
	});

	it('writes every meaning and limit as full sentences', () => {
		const texts = all.flatMap(({ meaning, limits }) => (limits === undefined ? [meaning] : [meaning, limits]));
		expect(texts.filter((text) => !/^[A-Z0-9].*\.$/s.test(text))).toEqual([]);
	});
});
