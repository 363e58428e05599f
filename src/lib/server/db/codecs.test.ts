import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decodePath, encodePath, outlineOf, PATH_CODEC } from './pathCodec.ts';
import { decodePublicId, encodePublicId, newPublicId } from './publicId.ts';
import { TRACE_CHANNELS, type TraceChannel } from './traceChannels.ts';
import { decodeTrace, encodeTrace, TRACE_VERSION } from './traceCodec.ts';

const float64 = (length: number) => new Float64Array(length);

/** A generator of even numbers in 0–1, the same each time (Numerical Recipes' linear congruence, from memory). */
function evenNumbers(seed: number): () => number {
	let state = seed;
	return () => (state = (state * 1664525 + 1013904223) >>> 0) / 2 ** 32;
}

describe('encodeTrace and decodeTrace', () => {
	it('give back what was kept, to half a step, and every gap', () => {
		fc.assert(
			fc.property(
				fc.array(fc.oneof(fc.double({ min: -3000, max: 3000, noNaN: true }), fc.constant(NaN)), { maxLength: 500 }),
				fc.constantFrom(...(Object.keys(TRACE_CHANNELS) as TraceChannel[])),
				(numbers, channel) => {
					const { perUnit } = TRACE_CHANNELS[channel];
					const values = Float64Array.from(numbers);
					const back = decodeTrace(encodeTrace(values, perUnit), float64);
					expect(back.length).toBe(values.length);
					values.forEach((value, i) => {
						if (Number.isNaN(value)) expect(back[i]).toBeNaN();
						else expect(Math.abs(back[i] - value)).toBeLessThanOrEqual(0.5 / perUnit + 1e-9);
					});
				}
			),
			{ seed: 3, numRuns: 300 }
		);
	});

	it('keep a lap of 12 channels and 5,000 metres, each with its sensor’s noise, in 40 kB', () => {
		const even = evenNumbers(1);
		const noise = () => Math.sqrt(-2 * Math.log(even() + 1e-12)) * Math.cos(2 * Math.PI * even());
		const column = (base: (m: number) => number, sd: number) =>
			Float64Array.from({ length: 5000 }, (_, m) => base(m) + sd * noise());
		let time = 0;
		const timeS = Float64Array.from({ length: 5000 }, (_, m) => (time += 1 / (45 + 20 * Math.sin(m / 200))));
		const speed = (m: number) => 160 + 70 * Math.sin(m / 200);
		const lap: [Float64Array, number][] = [
			[timeS, TRACE_CHANNELS.timeS.perUnit],
			[column(speed, 0.1), TRACE_CHANNELS.speedKmh.perUnit],
			[column((m) => Math.max(0, 80 * Math.sin(m / 130)), 0.3), TRACE_CHANNELS.brakePct.perUnit],
			[column((m) => Math.max(0, 80 * Math.cos(m / 130)), 0.3), TRACE_CHANNELS.throttlePct.perUnit],
			[column((m) => 90 * Math.sin(m / 170), 0.3), TRACE_CHANNELS.steeringDeg.perUnit],
			[column((m) => 4 * Math.sin(m / 170), 0.02), TRACE_CHANNELS.offsetM.perUnit],
			[column((m) => 0.02 * Math.sin(m / 170), 0.0001), TRACE_CHANNELS.curvaturePerM.perUnit],
			[column((m) => 10 * Math.sin(m / 170), 0.1), TRACE_CHANNELS.accLongMps2.perUnit],
			[column((m) => Math.round(3 + 2 * Math.sin(m / 170)), 0), TRACE_CHANNELS.gear.perUnit],
			[column((m) => 6000 + 2000 * Math.sin(m / 170), 5), TRACE_CHANNELS.engineSpeedRpm.perUnit],
			[column(speed, 0.3), 10],
			[column(speed, 0.3), 10]
		];
		const bytes = lap.reduce((sum, [values, perUnit]) => sum + encodeTrace(values, perUnit).payload.length, 0);
		console.log(`a lap of 12 channels and 5,000 metres is kept in ${bytes} bytes`);
		expect(bytes).toBeLessThanOrEqual(40_000);
	});

	it('refuse a row of a newer version', () => {
		const stored = encodeTrace(Float64Array.of(1, 2), 10);
		expect(() => decodeTrace({ ...stored, version: TRACE_VERSION + 1 }, float64)).toThrow(RangeError);
	});
});

describe('encodePath and decodePath', () => {
	it('keep places to half a millimetre', () => {
		const even = evenNumbers(5);
		const column = (range: number) => Float64Array.from({ length: 700 }, () => (even() - 0.5) * range);
		const path = { xM: column(4000), yM: column(4000), curvaturePerM: column(0.1), speedKmh: column(300) };
		const back = decodePath(PATH_CODEC, encodePath(path));
		path.xM.forEach((value, i) => expect(Math.abs(back.xM[i] - value)).toBeLessThanOrEqual(0.0005001));
		path.curvaturePerM.forEach((value, i) =>
			expect(Math.abs(back.curvaturePerM[i] - value)).toBeLessThanOrEqual(5.001e-7)
		);
	});

	it('draw it in at most 120 points', () => {
		const line = Float64Array.from({ length: 5311 }, (_, m) => m);
		expect(outlineOf({ xM: line, yM: line }).length).toBeLessThanOrEqual(121);
		expect(outlineOf({ xM: line.subarray(0, 3), yM: line.subarray(0, 3) })).toEqual([
			[0, 0],
			[1, 1],
			[2, 2]
		]);
	});
});

describe('public ids', () => {
	it('are 26 characters, and each stands for one value', () => {
		fc.assert(
			fc.property(fc.uint8Array({ minLength: 16, maxLength: 16 }), (bytes) => {
				const text = encodePublicId(bytes);
				expect(text).toMatch(/^[0-9a-hjkmnp-tv-z]{26}$/);
				expect(decodePublicId(text)).toEqual(Buffer.from(bytes));
			}),
			{ seed: 4, numRuns: 200 }
		);
	});

	it.each(['', 'z'.repeat(26), 'A'.repeat(26), '0'.repeat(25), 'l'.repeat(26), '0'.repeat(27)])(
		'are no ids: %s',
		(text) => {
			expect(decodePublicId(text)).toBeNull();
		}
	);

	it('are never the same twice', () => {
		expect(new Set(Array.from({ length: 1000 }, () => encodePublicId(newPublicId()))).size).toBe(1000);
	});
});
