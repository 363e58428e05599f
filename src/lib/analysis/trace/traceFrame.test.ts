import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decodeTraceFrame, encodeTraceFrame } from './traceFrame.ts';

const HEADER = { lap: '0'.repeat(26), lengthM: 3621.4, fromM: -250, lapTimeS: 98.104123 };

describe('encodeTraceFrame and decodeTraceFrame', () => {
	it.each([{ isPacked: true }, { isPacked: false }])(
		'give back every column and gap (packed: $isPacked)',
		({ isPacked }) => {
			fc.assert(
				fc.property(
					fc.array(fc.oneof(fc.integer({ min: -9000, max: 9000 }), fc.constant(NaN)), { maxLength: 300 }),
					(whole) => {
						const timeS = Float64Array.from(whole, (_, i) => 90 + i * 0.012345);
						const speedKmh = Float64Array.from(whole, (value) => value / 100);
						const frame = encodeTraceFrame(
							HEADER,
							[
								{ channel: 'timeS', unit: 's', perUnit: 1_000_000, values: timeS },
								{ channel: 'speedKmh', unit: 'km/h', perUnit: 100, values: speedKmh }
							],
							isPacked
						);
						const back = decodeTraceFrame(frame.buffer);
						expect(back).toMatchObject(HEADER);
						expect([...back.columns.keys()]).toEqual(['timeS', 'speedKmh']);
						expect(back.columns.get('speedKmh')).toEqual({ unit: 'km/h', values: Float32Array.from(speedKmh) });
						const time = back.columns.get('timeS')?.values ?? new Float32Array();
						expect(time).toBeInstanceOf(Float64Array);
						time.forEach((value, i) => expect(Math.abs(value - timeS[i])).toBeLessThan(1e-6));
					}
				),
				{ seed: 11, numRuns: 100 }
			);
		}
	);

	it('begins each column at a multiple of eight bytes, so that a program may look at it in place', () => {
		const values = Float64Array.of(1, 2, 3);
		const frame = encodeTraceFrame(
			HEADER,
			['a', 'b', 'c'].map((channel) => ({ channel, unit: '', perUnit: 1, values })),
			false
		);
		const length = new DataView(frame.buffer).getUint32(4, true);
		const header = JSON.parse(new TextDecoder().decode(frame.subarray(8, 8 + length)));
		for (const { byteOffset } of header.columns) expect(byteOffset % 8).toBe(0);
		expect(new Float32Array(frame.buffer, header.columns[1].byteOffset, 3)).toEqual(Float32Array.of(1, 2, 3));
	});

	it('refuses what is no frame, and any cut', () => {
		const frame = encodeTraceFrame(
			HEADER,
			[{ channel: 'a', unit: '', perUnit: 1, values: Float64Array.of(1, 2, 3, 4) }],
			false
		);
		for (let length = 0; length < frame.length - 8; length++) {
			expect(() => decodeTraceFrame(frame.slice(0, length).buffer)).toThrow();
		}
		expect(() => decodeTraceFrame(new TextEncoder().encode('{"error":"not found"}').buffer)).toThrow(RangeError);
	});
});
