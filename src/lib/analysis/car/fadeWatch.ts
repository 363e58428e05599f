import { KMH_PER_MPS } from '../../units.ts';
import type { Channels } from '../model.ts';

/** Deceleration at equal brake and equal speed over a run. */
export interface FadeWatch {
	/** share by which it changed from the run's begin to its end; −0.1 is a tenth less */
	changeShare: number;
	/** two standard errors of it */
	plusMinus: number;
	/** readings that it stands on */
	readings: number;
	/** clearly less at the end: "cool down, inspect" */
	sign: boolean;
}

/** Half of the window over which one reading is taken. */
const HALF_WINDOW_S = 0.15;
/** Braking that is strong enough to be read, and steady over the window. */
const LEAST_PCT = 25;
const STEADY_SHARE = 0.12;
const SLOWEST_KMH = 50;
/** Speeds within one bin are equal. */
export const BIN_KMH = 15;
export const LEAST_READINGS = 24;
/** Over less time nothing heats up or cools down. */
const LEAST_S = 180;
/** Loss from which it is a sign, if it is clear of its ±. */
export const FADE_SHARE = 0.08;
/** A brake that varies by less than this, %, says nothing of its own effect. */
const LEAST_PCT_SD = 1.5;
const ROUNDS = 6;
const BISQUARE_TUNING = 4.685;

interface Reading {
	timeS: number;
	bin: number;
	pct: number;
	mps2: number;
}

/**
 * Watches for brake fade: deceleration for the same per cent of brake (or the same bar, since a fixed full pressure only scales it), at
 * equal speed over the run.
 *
 * Each steady stretch of 0.3 s of braking gives one reading. Readings are compared only within 15 km/h of speed, where drag and downforce
 * are the same; least squares, iteratively reweighted (Tukey's bisquare). Sign: over 8 % less at the end, and clear of two standard errors.
 *
 * @returns null without a brake level, under three minutes, or with under 24 readings
 */
export function fadeWatch(channels: Channels): FadeWatch | null {
	const readings = readRun(channels);
	if (readings.length < LEAST_READINGS) return null;
	const times = readings.map(({ timeS }) => timeS);
	const [firstS, lastS] = [Math.min(...times), Math.max(...times)];
	if (!(lastS - firstS >= LEAST_S)) return null;
	const fit = pooledFit(readings);
	if (!fit) return null;
	const atBegin = fit.meanMps2 + fit.changePerS * fit.meanPct * (firstS - fit.meanTimeS);
	if (!(atBegin > 0)) return null;
	const overRun = (fit.meanPct * (lastS - firstS)) / atBegin;
	const changeShare = fit.changePerS * overRun;
	const plusMinus = 2 * fit.changeSe * overRun;
	return {
		changeShare,
		plusMinus,
		readings: readings.length,
		sign: changeShare < -FADE_SHARE && changeShare < -plusMinus
	};
}

function readRun({ timeS, speedKmh, brakePct, brakeUnit, sampleRateHz }: Channels): Reading[] {
	if (!brakePct || brakeUnit === 'switch') return [];
	const half = Math.max(1, Math.round(HALF_WINDOW_S * sampleRateHz));
	const readings: Reading[] = [];
	for (let i = half; i + half < timeS.length; i++) {
		if (!(brakePct[i] >= LEAST_PCT && speedKmh[i] >= SLOWEST_KMH)) continue;
		let [low, high, sum] = [Infinity, -Infinity, 0];
		for (let k = i - half; k <= i + half; k++) {
			low = Math.min(low, brakePct[k]);
			high = Math.max(high, brakePct[k]);
			sum += brakePct[k];
		}
		const seconds = timeS[i + half] - timeS[i - half];
		if (!(high - low <= STEADY_SHARE * high && seconds < 4 * HALF_WINDOW_S)) continue;
		const mps2 = (speedKmh[i - half] - speedKmh[i + half]) / KMH_PER_MPS / seconds;
		const bin = Math.floor(speedKmh[i] / BIN_KMH);
		readings.push({ timeS: timeS[i], bin, pct: sum / (2 * half + 1), mps2 });
		i += 2 * half;
	}
	return readings;
}

interface Fit {
	/** change of the deceleration for each % of brake, per s */
	changePerS: number;
	changeSe: number;
	meanMps2: number;
	meanPct: number;
	meanTimeS: number;
}

/**
 * Deceleration = level of the speed's bin + (effect + change · time) · brake, robust. The level takes up drag, so that a driver who
 * presses ever harder is no fade.
 */
function pooledFit(readings: Reading[]): Fit | null {
	let weights = readings.map(() => 1);
	let result: Fit | null = null;
	for (let round = 0; round < ROUNDS; round++) {
		const mean = weightedMeans(readings, weights);
		const bins = new Map<number, ReturnType<typeof weightedMeans>>();
		for (const bin of new Set(readings.map((one) => one.bin))) {
			const own = readings.map((one) => (one.bin === bin ? 1 : 0));
			bins.set(
				bin,
				weightedMeans(
					readings,
					own.map((is, i) => is * weights[i]),
					mean.timeS
				)
			);
		}
		const centred = readings.map((one) => {
			const own = bins.get(one.bin);
			return {
				change: one.pct * (one.timeS - mean.timeS) - (own?.pctTime ?? 0),
				pct: one.pct - (own?.pct ?? 0),
				mps2: one.mps2 - (own?.mps2 ?? 0)
			};
		});
		const sum = (of: (one: (typeof centred)[number]) => number) =>
			centred.reduce((total, one, i) => total + weights[i] * of(one), 0);
		const xx = sum((one) => one.change ** 2);
		const zz = sum((one) => one.pct ** 2);
		const xz = sum((one) => one.change * one.pct);
		const xy = sum((one) => one.change * one.mps2);
		const zy = sum((one) => one.pct * one.mps2);
		if (!(xx > 0)) return null;
		// a foot that always presses alike leaves the effect to the level of the bin
		const varies = zz > LEAST_PCT_SD ** 2 * mean.weight && xx * zz - xz * xz > 1e-6 * xx * zz;
		const determinant = varies ? xx * zz - xz * xz : xx;
		const changePerS = varies ? (xy * zz - zy * xz) / determinant : xy / xx;
		const effect = varies ? (zy * xx - xy * xz) / determinant : 0;
		const left = centred.map((one) => one.mps2 - changePerS * one.change - effect * one.pct);
		const squares = left.reduce((total, rest, i) => total + weights[i] * rest * rest, 0);
		const variance = squares / Math.max(1, mean.weight - bins.size - 2);
		result = {
			changePerS,
			changeSe: Math.sqrt(variance * (varies ? zz / determinant : 1 / xx)),
			meanMps2: mean.mps2,
			meanPct: mean.pct,
			meanTimeS: mean.timeS
		};
		const scale = Float64Array.from(left, Math.abs).sort()[left.length >> 1] / 0.6745;
		if (!(scale > 1e-9)) break;
		weights = left.map((rest) => Math.max(0, 1 - (rest / (BISQUARE_TUNING * scale)) ** 2) ** 2);
	}
	return result;
}

function weightedMeans(readings: Reading[], weights: number[], originS = 0) {
	const mean = { weight: 0, timeS: 0, pct: 0, mps2: 0, pctTime: 0 };
	readings.forEach(({ timeS, pct, mps2 }, i) => {
		mean.weight += weights[i];
		mean.timeS += weights[i] * timeS;
		mean.pct += weights[i] * pct;
		mean.mps2 += weights[i] * mps2;
		mean.pctTime += weights[i] * pct * (timeS - originS);
	});
	const total = mean.weight || 1;
	for (const key of ['timeS', 'pct', 'mps2', 'pctTime'] as const) mean[key] /= total;
	return mean;
}
