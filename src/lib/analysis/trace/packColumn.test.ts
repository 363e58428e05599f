import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { packColumn, unpackColumn } from './packColumn.ts';

const float64 = (length: number) => new Float64Array(length);
const float32 = (length: number) => new Float32Array(length);

describe('packColumn and unpackColumn', () => {
	const wholes = fc.array(fc.oneof(fc.integer({ min: -2_000_000, max: 2_000_000 }), fc.constant(NaN)), {
		maxLength: 400
	});

	it('give back every value at the resolution, and every gap', () => {
		fc.assert(
			fc.property(wholes, fc.constantFrom(1, 10, 100, 1_000_000), (whole, perUnit) => {
				const values = Float64Array.from(whole, (value) => value / perUnit);
				const before = values.slice();
				expect(unpackColumn(packColumn(values, perUnit), perUnit, float64)).toEqual(values);
				expect(values).toEqual(before);
			}),
			{ seed: 7, numRuns: 500 }
		);
	});

	it('round to the resolution, half a step at most', () => {
		fc.assert(
			fc.property(fc.array(fc.double({ min: -1e4, max: 1e4, noNaN: true }), { maxLength: 200 }), (numbers) => {
				const back = unpackColumn(packColumn(Float64Array.from(numbers), 100), 100, float64);
				numbers.forEach((number, i) => expect(Math.abs(back[i] - number)).toBeLessThanOrEqual(0.005 + 1e-9));
			}),
			{ seed: 8, numRuns: 300 }
		);
	});

	it('keep the microseconds of an hour', () => {
		const timeS = Float64Array.from({ length: 3600 }, (_, i) => i + ((i * 7919) % 1_000_000) / 1_000_000);
		expect(unpackColumn(packColumn(timeS, 1_000_000), 1_000_000, float64)).toEqual(
			timeS.map((value) => Math.round(value * 1_000_000) / 1_000_000)
		);
	});

	it.each([
		{ name: 'nothing', values: [] },
		{ name: 'one value', values: [12.5] },
		{ name: 'only a gap', values: [NaN, NaN, NaN] },
		{ name: 'a gap at the start', values: [NaN, 3, 4] },
		{ name: 'a gap at the end', values: [3, 4, NaN] },
		{ name: 'a value between gaps', values: [NaN, 3, NaN] },
		{ name: 'a jump over 31 bits', values: [0, 5e9, -5e9, 0] }
	])('give back $name', ({ values }) => {
		const column = Float64Array.from(values);
		expect(unpackColumn(packColumn(column, 10), 10, float64)).toEqual(column);
	});

	it('costs one byte for each entry of a straight line', () => {
		const line = Float32Array.from({ length: 1000 }, (_, i) => 3 * i);
		expect(packColumn(line, 1).length).toBeLessThan(1010);
		expect(unpackColumn(packColumn(line, 1), 1, float32)).toEqual(line);
	});

	it('refuses what it cannot keep', () => {
		expect(() => packColumn(Float64Array.of(Infinity), 1)).toThrow(RangeError);
		expect(() => packColumn(Float64Array.of(1e300), 1)).toThrow(RangeError);
		expect(() => packColumn(Float64Array.of(1), 0)).toThrow(RangeError);
		expect(() => packColumn(Float64Array.of(1), NaN)).toThrow(RangeError);
	});

	it('refuses bytes that are cut short, and any noise ends in a column or a RangeError', () => {
		const whole = packColumn(Float64Array.of(1, 2, NaN, 5, 900), 10);
		for (let length = 0; length < whole.length; length++) {
			expect(() => unpackColumn(whole.subarray(0, length), 10, float64)).toThrow(RangeError);
		}
		fc.assert(
			fc.property(fc.uint8Array({ maxLength: 60 }), (bytes) => {
				try {
					unpackColumn(bytes, 10, float64);
				} catch (error) {
					expect(error).toBeInstanceOf(RangeError);
				}
			}),
			{ seed: 9, numRuns: 1000 }
		);
	});
});
