import { KMH_PER_MPS } from '../../units.ts';
import type { Channels } from '../model.ts';

/**
 * What the car itself can do at full throttle: acceleration by speed, a(v) = c0 + c1·v + c2·v² with v in m/s. Plain numbers, so that
 * it can be stored as JSON.
 */
export interface FullThrottleModel {
	/** m/s², 1/s, 1/m */
	coefficients: [number, number, number];
	/** speeds between which the run says anything; outside, the value at the nearer end holds */
	fromKmh: number;
	toKmh: number;
	/** root mean square of what the curve leaves over, m/s² */
	residualMps2: number;
	/** stretches of full throttle that it stands on */
	samples: number;
	/** read at full throttle, or, without a throttle channel, taken from the strongest accelerations at each speed */
	from: 'throttle' | 'envelope';
}

const FULL_THROTTLE_PCT = 95;
const BRAKE_OFF_PCT = 2;
/** Half of the window over which one acceleration is read; shorter ones read the sensor's noise, longer ones smear gear changes. */
const HALF_WINDOW_S = 0.2;
/** One reading this often: neighbours closer than that share most of their samples. */
const STEP_S = 0.1;
const LOWEST_KMH = 15;
const BIN_KMH = 10;
const MIN_READINGS_PER_BIN = 3;
const MIN_READINGS = 15;
/** Share of a bin's readings that lie below its value: above the median, since gear changes and bends only ever take away. */
const ENVELOPE_QUANTILE = { throttle: 0.7, envelope: 0.95 };
/** Tukey's bisquare: readings further than this many robust s.d. from the curve do not count (a limiter, a tow). */
const BISQUARE_TUNING = 4.685;
const ROUNDS = 8;

interface Point {
	speedMps: number;
	accelerationMps2: number;
	weight: number;
}

/** Models by run: corner metrics and comparison ask for the same one. */
const fitted = new WeakMap<Channels, FullThrottleModel | null>();

/**
 * Fits the car's acceleration at full throttle by speed, for what arrival speed alone explains on a straight and for the idle gap.
 *
 * Readings: least-squares slope of speed over 0.4 s of unbroken full throttle, brake off, one gear. Per 10 km/h of speed their upper
 * envelope (70th percentile), then a quadratic by iteratively reweighted least squares (Tukey's bisquare). Few speeds give a straight
 * line or a constant. O(n), once for a run.
 *
 * @param channels the run
 * @returns the model, or null where the run holds under 15 readings
 */
export function fitFullThrottle(channels: Channels): FullThrottleModel | null {
	const known = fitted.get(channels);
	if (known !== undefined) return known;
	const model = fitModel(channels);
	fitted.set(channels, model);
	return model;
}

function fitModel(channels: Channels): FullThrottleModel | null {
	const from = channels.throttlePct ? 'throttle' : 'envelope';
	const readings = readAccelerations(channels);
	if (readings.length < MIN_READINGS) return null;
	const points = envelope(readings, ENVELOPE_QUANTILE[from]);
	if (points.length === 0) return null;
	const coefficients = fitRobustly(points);
	const speeds = points.map((point) => point.speedMps);
	let squares = 0;
	let weights = 0;
	for (const { speedMps, accelerationMps2, weight } of points) {
		squares += weight * (accelerationMps2 - evaluate(coefficients, speedMps)) ** 2;
		weights += weight;
	}
	return {
		coefficients,
		fromKmh: Math.min(...speeds) * KMH_PER_MPS,
		toKmh: Math.max(...speeds) * KMH_PER_MPS,
		residualMps2: Math.sqrt(squares / weights),
		samples: readings.length,
		from
	};
}

/**
 * The car's acceleration at full throttle at a speed.
 *
 * @returns m/s², never below 0; outside the fitted speeds the value at the nearer end
 */
export function fullThrottleAcceleration(model: FullThrottleModel, speedKmh: number): number {
	const held = Math.min(Math.max(speedKmh, model.fromKmh), model.toKmh) / KMH_PER_MPS;
	return Math.max(0, evaluate(model.coefficients, held));
}

function evaluate([c0, c1, c2]: readonly [number, number, number], speedMps: number): number {
	return c0 + (c1 + c2 * speedMps) * speedMps;
}

/** Speed and acceleration in the middle of each unbroken stretch of full throttle. */
function readAccelerations(channels: Channels): { speedMps: number; accelerationMps2: number }[] {
	const { timeS, speedKmh, throttlePct, brakePct, gear, sampleRateHz } = channels;
	const half = Math.max(1, Math.round(HALF_WINDOW_S * sampleRateHz));
	const step = Math.max(1, Math.round(STEP_S * sampleRateHz));
	const longestS = 2 * half * (1.5 / sampleRateHz);
	const readings: { speedMps: number; accelerationMps2: number }[] = [];
	let since = 1;
	for (let i = 1, next = 0; i < timeS.length; i++) {
		const counts =
			speedKmh[i] > LOWEST_KMH &&
			(!throttlePct || throttlePct[i] >= FULL_THROTTLE_PCT) &&
			(!brakePct || !(brakePct[i] > BRAKE_OFF_PCT)) &&
			(!gear || gear[i] === gear[i - 1]);
		if (!counts) {
			since = i + 1;
			continue;
		}
		const start = i - 2 * half;
		if (start < since || i < next || timeS[i] - timeS[start] > longestS) continue;
		next = i + step;
		const acceleration = slope(timeS, speedKmh, start, i) / KMH_PER_MPS;
		if (throttlePct || acceleration > 0) {
			readings.push({ speedMps: speedKmh[i - half] / KMH_PER_MPS, accelerationMps2: acceleration });
		}
	}
	return readings;
}

function slope(x: Float64Array, y: Float64Array, from: number, to: number): number {
	const n = to - from + 1;
	let meanX = 0;
	let meanY = 0;
	for (let i = from; i <= to; i++) {
		meanX += x[i] / n;
		meanY += y[i] / n;
	}
	let xy = 0;
	let xx = 0;
	for (let i = from; i <= to; i++) {
		xy += (x[i] - meanX) * (y[i] - meanY);
		xx += (x[i] - meanX) ** 2;
	}
	return xy / xx;
}

function envelope(readings: { speedMps: number; accelerationMps2: number }[], quantile: number): Point[] {
	const bins = new Map<number, { speedMps: number; accelerationMps2: number }[]>();
	for (const reading of readings) {
		const bin = Math.floor((reading.speedMps * KMH_PER_MPS) / BIN_KMH);
		const held = bins.get(bin);
		if (held) held.push(reading);
		else bins.set(bin, [reading]);
	}
	const points: Point[] = [];
	for (const held of bins.values()) {
		if (held.length < MIN_READINGS_PER_BIN) continue;
		const sorted = Float64Array.from(held, (reading) => reading.accelerationMps2).sort();
		const speedMps = held.reduce((sum, reading) => sum + reading.speedMps, 0) / held.length;
		const accelerationMps2 = sorted[Math.round(quantile * (sorted.length - 1))];
		// the square root keeps the speeds that a circuit holds most of from deciding alone
		points.push({ speedMps, accelerationMps2, weight: Math.sqrt(held.length) });
	}
	return points.sort((a, b) => a.speedMps - b.speedMps);
}

function fitRobustly(points: Point[]): [number, number, number] {
	const order = points.length >= 5 ? 2 : points.length >= 3 ? 1 : 0;
	let trust = points.map(() => 1);
	let fit = fitPolynomial(points, trust, order);
	for (let round = 0; round < ROUNDS; round++) {
		const left = points.map((point) => Math.abs(point.accelerationMps2 - evaluate(fit, point.speedMps)));
		const scale = Float64Array.from(left).sort()[left.length >> 1] / 0.6745;
		if (!(scale > 1e-6)) break;
		trust = left.map((rest) => Math.max(0, 1 - (rest / (BISQUARE_TUNING * scale)) ** 2) ** 2);
		fit = fitPolynomial(points, trust, order);
	}
	return fit;
}

/** Weighted least squares by the normal equations, about the mean speed and in units of its spread, which keeps them well conditioned. */
function fitPolynomial(points: Point[], trust: number[], order: 0 | 1 | 2): [number, number, number] {
	const total = points.reduce((sum, point, i) => sum + point.weight * trust[i], 0);
	const centre = points.reduce((sum, point, i) => sum + point.weight * trust[i] * point.speedMps, 0) / total;
	const spread = Math.max(1, ...points.map((point) => Math.abs(point.speedMps - centre)));
	const size = order + 1;
	const rows = Array.from({ length: size }, () => new Float64Array(size + 1));
	points.forEach((point, i) => {
		const u = (point.speedMps - centre) / spread;
		const weight = point.weight * trust[i];
		for (let r = 0; r < size; r++) {
			for (let c = 0; c < size; c++) rows[r][c] += weight * u ** (r + c);
			rows[r][size] += weight * u ** r * point.accelerationMps2;
		}
	});
	for (let pivot = 0; pivot < size; pivot++) {
		for (let r = 0; r < size; r++) {
			if (r === pivot || rows[pivot][pivot] === 0) continue;
			const factor = rows[r][pivot] / rows[pivot][pivot];
			for (let c = pivot; c <= size; c++) rows[r][c] -= factor * rows[pivot][c];
		}
	}
	const [b0 = 0, b1 = 0, b2 = 0] = rows.map((row, i) => (row[i] === 0 ? 0 : row[size] / row[i]));
	const shift = centre / spread;
	return [b0 - b1 * shift + b2 * shift * shift, (b1 - 2 * b2 * shift) / spread, b2 / (spread * spread)];
}
