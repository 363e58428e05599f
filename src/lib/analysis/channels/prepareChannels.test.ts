import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { gunzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import type { Channels } from '../model.ts';
import { readRun } from '../../parse/index.ts';
import type { RawRun } from '../../parse/rawRun.ts';
import { prepareChannels } from './prepareChannels.ts';

async function runOf(file: string): Promise<RawRun> {
	const [run] = await readRun(gunzipSync(readFileSync(resolve('fixtures', `${file}.csv.gz`))), { fileName: file });
	return run;
}

const channelsOf = async (file: string): Promise<Channels> => prepareChannels(await runOf(file));

const codes = (channels: Channels) => channels.warnings.map(({ code }) => code);

const worst = (a: ArrayLike<number>, b: ArrayLike<number>): number => {
	let largest = 0;
	for (let i = 0; i < a.length; i++) largest = Math.max(largest, Math.abs(a[i] - b[i]));
	return largest;
};

/** A recording made of functions of time. */
function recording(
	rateHz: number,
	seconds: number,
	channels: Record<string, (timeS: number) => number>,
	rest: Partial<RawRun> = {}
): RawRun {
	const timeS = Float64Array.from({ length: Math.round(rateHz * seconds) + 1 }, (_, i) => i / rateHz);
	const columns: RawRun['columns'] = {};
	for (const [name, value] of Object.entries(channels))
		Object.assign(columns, { [name]: Float64Array.from(timeS, value) });
	return {
		source: {
			rows: timeS.length,
			sampleRateHz: rateHz,
			columns: [],
			warnings: [],
			encoding: 'utf-8',
			delimiter: ',',
			decimal: '.',
			headerRow: 1,
			metadata: {}
		},
		timeS,
		fileRow: Int32Array.from(timeS, (_, i) => i + 2),
		columns,
		brakeUnit: 'brake' in channels ? 'pct' : null,
		wheelUnit: 'wheelSpeedFl' in channels ? 'kmh' : null,
		startedAtMs: null,
		...rest
	};
}

/** Speed that falls from 180 to 60 km/h and rises again every 20 s, and its pedals. */
const phase = (timeS: number) => timeS % 20;
const sawSpeed = (timeS: number) => (phase(timeS) < 4 ? 180 - 30 * phase(timeS) : 60 + 7.5 * (phase(timeS) - 4));
const sawBrake = (timeS: number) => (phase(timeS) < 4 ? 80 : 0);
const sawThrottle = (timeS: number) => (phase(timeS) < 4.5 ? 0 : 100);

describe('prepareChannels: motion', () => {
	it('integrates a constant acceleration exactly', () => {
		const channels = prepareChannels(recording(50, 20, { speed: (timeS) => 36 + 3.6 * timeS }));
		// s = v₀ t + ½ a t² with v₀ = 10 m/s, a = 1 m/s².
		expect(channels.distanceM.at(-1)).toBeCloseTo(10 * 20 + 0.5 * 20 * 20, 9);
		expect(channels.distanceMeasured).toBe(false);
	});

	it('carries a lap distance over the line by the speed', () => {
		const lapM = 400;
		const channels = prepareChannels(
			recording(20, 60, { speed: () => 72, lapDistance: (timeS) => (20 * timeS + 100) % lapM })
		);
		expect(channels.distanceMeasured).toBe(true);
		expect(channels.distanceM.at(-1)).toBeCloseTo(20 * 60, 6);
	});

	it('takes the speed from the distance where the file has none', async () => {
		const [derived, plain] = [await channelsOf('import/no_speed'), await channelsOf('import/plain')];
		expect(codes(derived)).toContain('speed_from_distance');
		// 10 Hz, 1 cm: half a step of distance over two samples is 0.18 km/h; the kinks of the speed add a sample's worth.
		expect(worst(derived.speedKmh, plain.speedKmh)).toBeLessThan(2.5);
	});

	it('takes the speed from positions where there is nothing else, on another line of thought than the distance', () => {
		const [radiusM, speedMps] = [80, 25];
		const turn = (timeS: number) => (speedMps * timeS) / radiusM;
		const channels = prepareChannels(
			recording(25, 40, {
				positionX: (t) => radiusM * Math.cos(turn(t)),
				positionY: (t) => radiusM * Math.sin(turn(t))
			})
		);
		expect(codes(channels)).toContain('speed_from_positions');
		const inner = channels.speedKmh.slice(10, -10);
		expect(
			worst(
				inner,
				inner.map(() => 90)
			)
		).toBeLessThan(0.5);
	});

	it('replaces a speed that stands still while the distance goes on', async () => {
		const [frozen, plain] = [await channelsOf('import/speed_frozen'), await channelsOf('import/plain')];
		const warning = frozen.warnings.find(({ code }) => code === 'frozen_channel');
		expect(warning?.row).toBeGreaterThan(660);
		expect(worst(frozen.speedKmh, plain.speedKmh)).toBeLessThan(6);
	});

	it('does not take a held top speed for a frozen one', async () => {
		expect(codes(await channelsOf('import/plain'))).not.toContain('frozen_channel');
	});

	it('uses the size of negative speeds and says so', async () => {
		const channels = await channelsOf('import/speed_negative');
		expect(codes(channels)).toContain('negative_speed');
		expect(channels.speedKmh.every((speed) => speed >= 0)).toBe(true);
	});

	it('says where the recording has a gap', async () => {
		const channels = await channelsOf('import/dropout_1p5s');
		expect(channels.warnings.find(({ code }) => code === 'gap')?.message).toContain('1.6 s');
	});

	it('tells a speed whose scale is off from the distance', () => {
		const channels = prepareChannels(
			recording(20, 60, { speed: (t) => 1.08 * sawSpeed(t), distance: distanceOf(sawSpeed) })
		);
		expect(channels.warnings.find(({ code }) => code === 'speed_scale_differs')?.message).toContain('8 % higher');
	});

	it('measures a slower sensor in a faster file at its own samples', () => {
		const held = (t: number) => sawSpeed(Math.floor(t * 10 + 1e-9) / 10);
		const channels = prepareChannels(recording(100, 60, { speed: held }));
		let largest = 0;
		channels.timeS.forEach((t, i) => {
			if (phase(t) > 0.2 && phase(t) < 19.7) largest = Math.max(largest, Math.abs(channels.speedKmh[i] - sawSpeed(t)));
		});
		// A tenth of a second of braking is 3 km/h; lines between the samples leave the kinks alone.
		expect(largest).toBeLessThan(1);
	});

	it('leaves the recording as it was', () => {
		const raw = recording(50, 40, { speed: sawSpeed, brake: sawBrake, throttle: sawThrottle });
		const copy = structuredClone(raw);
		prepareChannels(raw);
		expect(JSON.stringify([...raw.timeS, raw.columns, raw.source])).toBe(
			JSON.stringify([...copy.timeS, copy.columns, copy.source])
		);
	});
});

describe('prepareChannels: pedals', () => {
	it('leaves a percentage a percentage and takes its rest level off', () => {
		const raw = recording(50, 60, { speed: sawSpeed, throttle: sawThrottle, brake: (t) => 4 + 0.96 * sawBrake(t) });
		const channels = prepareChannels(raw);
		expect(codes(channels)).toContain('brake_offset_removed');
		expect(channels.brakePct?.[10]).toBeCloseTo(80, 9);
		expect(channels.brakePct?.[500]).toBeCloseTo(0, 9);
		expect([channels.brakeUnit, channels.brakeFull]).toEqual(['pct', null]);
	});

	it('scales a pressure by the full value of the car where one is set', () => {
		const raw = recording(
			50,
			60,
			{ speed: sawSpeed, throttle: sawThrottle, brake: (t) => 1.01 + sawBrake(t) / 2 },
			{ brakeUnit: 'bar' }
		);
		const channels = prepareChannels(raw, { brakeFull: 60 });
		expect(channels.brakePct?.[10]).toBeCloseTo((100 * 40) / 60, 6);
		expect([channels.brakeFull, channels.brakeScaleAssumed]).toEqual([60, false]);
		expect(codes(channels)).not.toContain('brake_scale_assumed');
	});

	it('takes the 99.5th percentile of the braking samples for full where none is set, and says so', async () => {
		const channels = await channelsOf('import/brake_counts');
		expect(codes(channels)).toEqual(expect.arrayContaining(['brake_scale_assumed', 'brake_offset_removed']));
		expect(channels.brakeScaleAssumed).toBe(true);
		expect(channels.brakeUnit).toBe('raw');
		// Rest 312, hardest braking 95 % of the span to 3 822.
		expect(channels.brakeFull).toBeCloseTo(0.95 * (3822 - 312), -1);
		const plain = await channelsOf('import/plain');
		const rescaled = channels.brakePct?.map((value) => value * 0.95) ?? [];
		expect(worst(rescaled, plain.brakePct ?? [])).toBeLessThan(0.1);
	});

	it('knows onset and end only from a switch', async () => {
		const channels = await channelsOf('import/brake_on_off');
		expect(channels.brakeUnit).toBe('switch');
		expect(new Set(channels.brakePct)).toEqual(new Set([0, 100]));
		expect(codes(channels)).toContain('brake_switch_only');
	});

	it('reads counts that fall when the pedal is pressed', () => {
		const raw = recording(
			50,
			60,
			{ speed: sawSpeed, throttle: sawThrottle, brake: (t) => 3900 - 30 * sawBrake(t) },
			{ brakeUnit: 'raw' }
		);
		const channels = prepareChannels(raw);
		expect(channels.brakePct?.[10]).toBeCloseTo(100, 6);
		expect(channels.brakePct?.[500]).toBeCloseTo(0, 6);
	});

	it('leaves out a brake that never moves although the car brakes', () => {
		const channels = prepareChannels(recording(50, 60, { speed: sawSpeed, throttle: sawThrottle, brake: () => 0 }));
		expect(channels.brakePct).toBeNull();
		expect(codes(channels)).toContain('frozen_channel');
	});

	it('turns an inverted throttle round', async () => {
		const [inverted, plain] = [await channelsOf('import/throttle_inverted'), await channelsOf('import/plain')];
		expect(codes(inverted)).toContain('throttle_inverted');
		expect(worst(inverted.throttlePct ?? [], plain.throttlePct ?? [])).toBeLessThan(0.2);
	});

	it('scales idle and full of the run to 0 and 100', () => {
		const channels = prepareChannels(
			recording(50, 100, { speed: sawSpeed, throttle: (t) => 8 + 0.89 * sawThrottle(t) })
		);
		expect(codes(channels)).toContain('throttle_scaled');
		expect([Math.min(...(channels.throttlePct ?? [])), Math.max(...(channels.throttlePct ?? []))]).toEqual([0, 100]);
	});

	it('does not stretch a throttle that the driver never opened fully', () => {
		const careful = (t: number) => (phase(t) < 4.5 ? 0 : 45 + 30 * Math.sin(phase(t)));
		const channels = prepareChannels(recording(50, 100, { speed: sawSpeed, throttle: careful }));
		expect(Math.max(...(channels.throttlePct ?? []))).toBeLessThan(76);
	});
});

describe('prepareChannels: signs and scales', () => {
	const [radiusM, speedMps] = [60, 20];
	const turn = (t: number) => (speedMps * t) / radiusM;
	/** A left-hand circle, anticlockwise, driven at constant speed. */
	const circle = {
		speed: () => speedMps * 3.6,
		positionX: (t: number) => radiusM * Math.cos(turn(t)),
		positionY: (t: number) => radiusM * Math.sin(turn(t))
	};
	const [yaw, lateral] = [speedMps / radiusM, (speedMps * speedMps) / radiusM];

	it.each([1, -1])('makes left positive whatever the file has it (%d)', (sign) => {
		const raw = recording(50, 60, {
			...circle,
			yawRate: () => sign * yaw,
			accLat: () => sign * lateral,
			steering: () => sign * 30
		});
		const channels = prepareChannels(raw);
		expect(channels.yawRateRadps?.[500]).toBeCloseTo(yaw, 6);
		expect(channels.accLatMps2?.[500]).toBeCloseTo(lateral, 6);
		expect(channels.steeringDeg?.[500]).toBeCloseTo(30, 6);
	});

	it('puts right a lateral acceleration that is in g', () => {
		const channels = prepareChannels(recording(50, 60, { ...circle, accLat: () => lateral / 9.80665 }));
		expect(channels.accLatMps2?.[500]).toBeCloseTo(lateral, 1);
		expect(codes(channels)).toContain('unit_assumed');
	});

	it('turns a longitudinal acceleration that is positive under braking', () => {
		const acceleration = (t: number) => -(phase(t) < 4 ? -30 : 7.5) / 3.6;
		const channels = prepareChannels(recording(50, 100, { speed: sawSpeed, accLong: acceleration }));
		expect(channels.accLongMps2?.[50]).toBeCloseTo(-30 / 3.6, 6);
	});

	it('takes zeros, repeats and jumps for no position and bridges what is short', () => {
		const raw = recording(50, 60, circle);
		raw.columns.positionX?.fill(0, 0, 30);
		raw.columns.positionY?.fill(0, 0, 30);
		raw.columns.positionX?.fill(5000, 1000, 1003);
		raw.columns.positionX?.fill(raw.columns.positionX[1500], 1500, 1510);
		raw.columns.positionY?.fill(raw.columns.positionY[1500], 1500, 1510);
		const channels = prepareChannels(raw);
		expect(channels.xM?.[10]).toBeNaN();
		for (const i of [1001, 1505]) {
			expect(
				Math.hypot(
					(channels.xM?.[i] ?? 0) - circle.positionX(i / 50),
					(channels.yM?.[i] ?? 0) - circle.positionY(i / 50)
				)
			).toBeLessThan(0.02);
		}
		expect(codes(channels)).toEqual(expect.arrayContaining(['position_jump', 'positions_missing']));
	});

	it('fits the rolling radius of each wheel, driven ones too, on a simulator recording', async () => {
		const channels = await channelsOf('simulator/track-a_driver-1');
		const fast = [...channels.speedKmh.keys()].filter(
			(i) => channels.speedKmh[i] > 100 && Math.abs(channels.accLongMps2?.[i] ?? 9) < 1
		);
		for (const wheel of ['fl', 'fr', 'rl', 'rr'] as const) {
			const ratios = fast
				.map((i) => (channels.wheelKmh?.[wheel][i] ?? NaN) / channels.speedKmh[i])
				.sort((a, b) => a - b);
			expect(ratios[ratios.length >> 1], wheel).toBeCloseTo(1, 1.7);
		}
	});

	it('moves wheel speeds whose clock lags the speed', () => {
		const lagged = (t: number) => sawSpeed(t - 0.12);
		const raw = recording(100, 100, {
			speed: sawSpeed,
			wheelSpeedFl: lagged,
			wheelSpeedFr: lagged,
			wheelSpeedRl: lagged,
			wheelSpeedRr: lagged
		});
		const channels = prepareChannels(raw);
		expect(Math.abs((channels.wheelKmh?.fl[1200] ?? 0) - channels.speedKmh[1200])).toBeLessThan(0.15);
	});

	it('agrees with itself on a simulator recording: path, yaw rate and lateral acceleration turn the same way', async () => {
		const channels = await channelsOf('simulator/track-a_driver-3');
		let [sum, size] = [0, 0];
		channels.timeS.forEach((_, i) => {
			const expected = (channels.yawRateRadps?.[i] ?? 0) * (channels.speedKmh[i] / 3.6);
			sum += expected * (channels.accLatMps2?.[i] ?? 0);
			size += expected * expected;
		});
		expect(sum / size).toBeGreaterThan(0.8);
		expect(sum / size).toBeLessThan(1.2);
	});
});

/** Integral of a speed in km/h by fine steps, m. */
function distanceOf(speed: (timeS: number) => number): (timeS: number) => number {
	const step = 0.005;
	const way: number[] = [0];
	return (timeS) => {
		const index = Math.round(timeS / step);
		while (way.length <= index) way.push(way[way.length - 1] + (speed((way.length - 0.5) * step) / 3.6) * step);
		return way[index];
	};
}
