import { describe, expect, it } from 'vitest';
import { STAGES, parseTestArguments } from './testArguments.mjs';

describe('parseTestArguments', () => {
	it.each([
		{ args: [], expected: { stages: STAGES, long: false, rest: [] } },
		{ args: ['--long'], expected: { stages: STAGES, long: true, rest: [] } },
		{ args: ['--only', 'db'], expected: { stages: ['db'], long: false, rest: [] } },
		{ args: ['--only=e2e,lint'], expected: { stages: ['lint', 'e2e'], long: false, rest: [] } },
		{
			args: ['--only', 'db', 'tests/db/jobs.test.ts', '-t', 'claims'],
			expected: { stages: ['db'], long: false, rest: ['tests/db/jobs.test.ts', '-t', 'claims'] }
		},
		{ args: ['--only', 'core', '--long'], expected: { stages: ['core'], long: true, rest: [] } }
	])('reads $args', ({ args, expected }) => {
		expect(parseTestArguments(args)).toEqual(expected);
	});

	it.each([
		{ args: ['--only'], says: '--only takes one or more of' },
		{ args: ['--only', 'unit'], says: 'got "unit"' },
		{ args: ['tests/db'], says: 'npm test takes --long and --only STAGE, got "tests/db".' }
	])('refuses $args', ({ args, says }) => {
		expect(() => parseTestArguments(args)).toThrow(says);
	});
});
