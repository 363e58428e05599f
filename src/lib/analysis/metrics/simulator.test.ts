import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import { describe, expect, it, vi } from 'vitest';
import { readRun } from '../../parse/index.ts';
import { prepareChannels } from '../channels/prepareChannels.ts';
import { fitFullThrottle, fullThrottleAcceleration } from '../car/fullThrottle.ts';
import { brakeApplications } from './brakeApplications.ts';
import { lockUps } from './lockUps.ts';
import { pedalNoise } from './noiseLevel.ts';

/** Recordings of an independent simulator's physics (fixtures/simulator); its laps file says when which wheels locked. */
const folder = new URL('../../../../fixtures/simulator/', import.meta.url);

interface LapsTruth {
	first_sample_time_s: number;
	laps: {
		lap: number;
		complete: boolean;
		standing_start: boolean;
		start_time_interp_s: number;
		end_time_interp_s: number;
	}[];
	lock_events: { locked_s: number }[];
}

// reading 20,000 rows takes a second, and several on a busy machine
vi.setConfig({ testTimeout: 60_000 });

const RUNS = ['track-a_driver-1', 'track-a_driver-3', 'oval-a_driver-3', 'track-x8_driver-1'];

const known = new Map<string, ReturnType<typeof readFresh>>();

function read(name: string): ReturnType<typeof readFresh> {
	const reading = known.get(name) ?? readFresh(name);
	known.set(name, reading);
	return reading;
}

async function readFresh(name: string) {
	const bytes = gunzipSync(readFileSync(new URL(`${name}.csv.gz`, folder)));
	const [raw] = await readRun(bytes, { fileName: `${name}.csv` });
	const truth = JSON.parse(readFileSync(new URL(`${name}.laps.json`, folder), 'utf8')) as LapsTruth;
	return { channels: prepareChannels(raw), truth };
}

describe('a robot that pulses its brake at the sampling rate', () => {
	it.each(RUNS)('brakes in few applications, the same ones lap after lap: %s', async (name) => {
		const { channels, truth } = await read(name);
		const values = channels.brakePct ?? new Float64Array(channels.timeS.length);
		expect(pedalNoise(values)).toBe(0);
		const found = brakeApplications({ timeS: channels.timeS, values, noise: 0 }, channels.speedKmh, 0.03);
		const laps = truth.laps.filter((lap) => lap.complete && !lap.standing_start);
		const counts = laps.map((lap) => {
			const [from, to] = [lap.start_time_interp_s, lap.end_time_interp_s].map((t) => t - truth.first_sample_time_s);
			return found.filter((one) => {
				const atS = channels.timeS[one.onsetIndex + 1];
				return one.impulsePctS > 3 && atS >= from && atS < to;
			}).length;
		});
		const rises = values.reduce((sum, value, i) => sum + (i > 0 && value >= 5 && values[i - 1] < 5 ? 1 : 0), 0);
		console.log(`${name}: ${rises} rises of the pedal, ${found.length} applications, per lap ${counts.join(' ')}`);
		expect(Math.max(...counts)).toBeLessThanOrEqual(9);
		expect(Math.max(...counts) - Math.min(...counts)).toBeLessThanOrEqual(1);
	});

	it.each(RUNS)('locks no wheel where the physics say that none locked: %s', async (name) => {
		const { channels, truth } = await read(name);
		expect(truth.lock_events.filter((event) => event.locked_s >= 0.05)).toEqual([]);
		expect(lockUps(channels)).toEqual([]);
	});
});

describe('fitFullThrottle on a simulated car', () => {
	it('gives an acceleration that falls with speed and fits the run’s own readings', async () => {
		const { channels } = await read('track-a_driver-1');
		const model = fitFullThrottle(channels);
		expect(model).not.toBeNull();
		if (!model) return;
		expect(model.residualMps2).toBeLessThan(0.6);
		const [slow, fast] = [model.fromKmh, model.toKmh].map((speed) => fullThrottleAcceleration(model, speed));
		expect(slow).toBeGreaterThan(fast);
		expect(fast).toBeGreaterThanOrEqual(0);
	});
});
