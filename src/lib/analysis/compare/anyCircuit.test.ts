import { describe, it } from 'vitest';
import { expectNamedOnAnyCircuit, MISTAKES } from '../../../../tests/helpers/mistakes.ts';

describe('compareLaps on any circuit', { timeout: 60_000 }, () => {
	it.each(MISTAKES)('names $name first, with its cost and at its corner', (mistake) => {
		expectNamedOnAnyCircuit(mistake, 10);
	});
});
