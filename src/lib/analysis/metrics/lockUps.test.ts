import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import type { Wheel } from '../../schemas/analysisDocument.ts';
import type { Channels } from '../model.ts';
import { lockUps } from './lockUps.ts';
import { measureRun } from './measureRun.ts';
import { channelsOf } from './testing/channelsOf.ts';
import { cornerAt, placedOf, placeOnCourse } from './testing/placedOf.ts';

interface LockCase {
	file: string;
	sample_rate_hz: number;
	lock_events: { wheel: string; interval_where_slip_exceeds: Record<string, [number, number]>; peak_slip: number }[];
}

const folder = new URL('../../../../fixtures/lock-up/', import.meta.url);
const text = (name: string) => gunzipSync(readFileSync(new URL(`${name}.gz`, folder))).toString('utf8');
const { cases } = JSON.parse(text('truth.json')) as { cases: LockCase[] };
const WHEEL_OF: Record<string, Wheel> = {
	'front left': 'fl',
	'front right': 'fr',
	'rear left': 'rl',
	'rear right': 'rr'
};

/** time, speed, brake, four wheels, in the order in which the files have them; `startS` is the first sample on the truth's clock */
function readCase(name: string): { channels: Channels; startS: number } {
	const rows = text(name)
		.trim()
		.split('\n')
		.slice(1)
		.map((line) => line.split(',').map(Number));
	const column = (index: number) => rows.map((row) => row[index]);
	const startS = rows[0][0];
	const base = channelsOf({ timeS: column(0).map((t) => t - startS), speedKmh: column(1), brakePct: column(2) });
	const [fl, fr, rl, rr] = [3, 4, 5, 6].map((index) => Float64Array.from(column(index)));
	return { channels: { ...base, wheelKmh: { fl, fr, rl, rr } }, startS };
}

// hundreds of runs a property; a busy machine needs more than the usual five seconds
vi.setConfig({ testTimeout: 60_000 });

describe('lockUps', () => {
	it.each(cases)('finds the locks of $file and no other', ({ file, lock_events, sample_rate_hz }) => {
		const { channels, startS } = readCase(file);
		const found = lockUps(channels);
		expect(found.map((lock) => lock.wheel)).toEqual(lock_events.map((event) => WHEEL_OF[event.wheel]));
		found.forEach((lock, i) => {
			const [from, to] = lock_events[i].interval_where_slip_exceeds['0.3'];
			expect(Math.abs(lock.startS + startS - from)).toBeLessThan(0.5 / sample_rate_hz);
			expect(Math.abs(lock.endS + startS - to)).toBeLessThan(0.5 / sample_rate_hz);
			expect(lock.lowestSlip).toBeCloseTo(-lock_events[i].peak_slip, 2);
		});
	});

	it('finds the same locks whatever the rolling radius and the lag between the clocks', () => {
		const { channels } = readCase('pump_100hz.csv');
		const plain = lockUps(channels);
		fc.assert(
			fc.property(fc.double({ min: 0.2, max: 5, noNaN: true }), fc.integer({ min: -25, max: 25 }), (scale, lag) => {
				const wheels = channels.wheelKmh!;
				const moved = (wheel: Wheel) =>
					wheels[wheel].map((_, i) => scale * wheels[wheel][Math.min(Math.max(i - lag, 0), wheels[wheel].length - 1)]);
				const found = lockUps({
					...channels,
					wheelKmh: { fl: moved('fl'), fr: moved('fr'), rl: moved('rl'), rr: moved('rr') }
				});
				expect(found).toHaveLength(plain.length);
				found.forEach((lock, i) => {
					expect(lock.wheel).toBe(plain[i].wheel);
					expect(Math.abs(lock.startS - plain[i].startS)).toBeLessThan(0.02);
				});
			}),
			{ numRuns: 40, seed: 7 }
		);
	});

	it('finds them through noise on wheels and speed', () => {
		const { channels } = readCase('pump_100hz.csv');
		fc.assert(
			fc.property(fc.infiniteStream(fc.double({ min: -1.2, max: 1.2, noNaN: true })), (noise) => {
				const rough = (values: Float64Array) => values.map((value) => Math.max(0, value + (noise.next().value ?? 0)));
				const wheels = channels.wheelKmh!;
				const found = lockUps({
					...channels,
					speedKmh: rough(channels.speedKmh),
					wheelKmh: { fl: rough(wheels.fl), fr: rough(wheels.fr), rl: rough(wheels.rl), rr: rough(wheels.rr) }
				});
				expect(found.map((lock) => lock.wheel)).toEqual(['fr', 'fr', 'fr', 'fr', 'fr']);
			}),
			{ numRuns: 5, seed: 3 }
		);
	});

	it('takes a sensor that drops to zero and back from one sample to the next for no lock', () => {
		const { channels } = readCase('none_50hz.csv');
		const brake = channels.brakePct!;
		const middle = brake.indexOf(Math.max(...brake)) + 20;
		const fl = channels.wheelKmh!.fl.map((value, i) => (Math.abs(i - middle) < 6 ? 0 : value));
		expect(lockUps({ ...channels, wheelKmh: { ...channels.wheelKmh!, fl } })).toEqual([]);
	});

	it('does not take the inner wheels of a tight turn for locked ones where the yaw rate is known', () => {
		// 60 km/h, 4.2 rad/s, track 1.4 m: inner wheels turn 18 % slower than the car, and 18 % of slip comes on top
		const timeS = Array.from({ length: 1500 }, (_, i) => i / 50);
		const turning = timeS.map((t) => t % 10 > 5);
		const base = channelsOf({
			timeS,
			speedKmh: timeS.map(() => 60),
			brakePct: timeS.map((t) => (t % 10 > 8 ? 30 : 0)),
			yawRateRadps: turning.map((turns) => (turns ? 4.2 : 0))
		});
		const wheel = (side: number) =>
			Float64Array.from(timeS, (t, i) => (60 + side * 0.7 * (turning[i] ? 4.2 : 0) * 3.6) * (t % 10 > 8 ? 0.82 : 1));
		const wheelKmh = { fl: wheel(-1), fr: wheel(1), rl: wheel(-1), rr: wheel(1) };
		expect(lockUps({ ...base, wheelKmh })).toEqual([]);
		expect(lockUps({ ...base, wheelKmh, yawRateRadps: null }).length).toBeGreaterThan(0);
	});

	it('says nothing without wheel speeds', () => {
		expect(lockUps({ ...readCase('one_front_50hz.csv').channels, wheelKmh: null })).toEqual([]);
	});
});

describe('the corner of a lock-up', () => {
	it('is the first that ends behind it, and two wheels that lock together count once', () => {
		const speedKmh: [number, number][] = [
			[0, 180],
			[3, 180],
			[6, 72],
			[12, 72]
		];
		const at = (timeS: number) => placeOnCourse(speedKmh, timeS);
		const placed = placedOf({
			lengthS: 12,
			rateHz: 100,
			speedKmh,
			brakePct: [
				[0, 0],
				[3, 0],
				[3.1, 90],
				[5.5, 90],
				[6, 0]
			]
		});
		const rolling = placed.channels.speedKmh;
		const locked = (fromS: number, toS: number) =>
			rolling.map((speed, i) =>
				placed.channels.timeS[i] > fromS && placed.channels.timeS[i] < toS ? 0.3 * speed : speed
			);
		const wheelKmh = { fl: locked(4, 4.4), fr: locked(4.1, 4.5), rl: locked(5, 5.2), rr: rolling };
		const corners = [cornerAt(at(0.5), at(1), at(1.5)), cornerAt(at(5), at(7), at(9), { number: 2 })];
		const run = { ...placed, channels: { ...placed.channels, wheelKmh } };
		const { metrics, lockUps: found } = measureRun(run, corners);
		expect(found.map(({ wheel, lap, corner }) => ({ wheel, lap, corner }))).toEqual([
			{ wheel: 'fl', lap: 1, corner: 2 },
			{ wheel: 'fr', lap: 1, corner: 2 },
			{ wheel: 'rl', lap: 1, corner: 2 }
		]);
		expect(metrics.map((m) => m.lockUps)).toEqual([0, 2]);
	});
});
