import { describe, expect, it } from 'vitest';
import { chooseEncoding } from './chooseEncoding.ts';

describe('chooseEncoding', () => {
	it.each([
		{ name: 'takes brotli from a browser', accepted: 'gzip, deflate, br, zstd', expected: 'br' },
		{ name: 'takes gzip where brotli is not named', accepted: 'gzip, deflate', expected: 'gzip' },
		{ name: 'takes gzip where it weighs more', accepted: 'br;q=0.5, gzip;q=0.8', expected: 'gzip' },
		{ name: 'refuses what weighs nothing', accepted: 'br;q=0, gzip;q=0', expected: null },
		{ name: 'lets a star stand for what is not named', accepted: 'gzip;q=0.2, *;q=0.7', expected: 'br' },
		{ name: 'does not let a star bring back what is refused', accepted: 'br;q=0, *', expected: 'gzip' },
		{ name: 'knows the old name of gzip', accepted: 'x-gzip', expected: 'gzip' },
		{ name: 'leaves an answer alone for identity', accepted: 'identity', expected: null },
		{ name: 'leaves an answer alone where nothing is said', accepted: null, expected: null },
		{ name: 'takes a broken weight as a refusal', accepted: 'br;q=x, gzip;q=2', expected: null },
		{ name: 'reads upper case and odd spaces', accepted: ' BR ; Q=1 ,GZIP', expected: 'br' }
	])('$name', ({ accepted, expected }) => {
		expect(chooseEncoding(accepted)).toBe(expected);
	});
});
