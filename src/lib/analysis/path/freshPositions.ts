import { quantile } from '../stats/quantile.ts';
import type { Channels } from '../model.ts';
import { KMH_PER_MPS } from '../../units.ts';

/** Positions worth believing: which samples bring a new one, and how noisy they are. */
export interface Positions {
	/** samples with a position that is known, new and reachable; increasing */
	sample: Int32Array;
	/** coordinates of those samples; not to be written into, they may be the run's own columns */
	xM: Float64Array;
	yM: Float64Array;
	/** standard deviation of one coordinate from sample to sample, m */
	noiseM: number;
	/** samples left out because the car cannot have been there */
	jumps: number;
	/** first sample left out so, −1 for none */
	firstJump: number;
}

/** A car stands below this; then a repeated position is not a stale one. */
const STANDING_KMH = 3.6;
/** A step may exceed what speed explains by this factor and slack (noise, slow receivers) before it is a jump. */
const STEP_FACTOR = 2;
const STEP_SLACK_M = 8;
/** After this long without a reachable position the car is believed to be at the new place. */
const BELIEVE_AFTER_S = 2;
/** The noise is estimated while the car moves: standing receivers filter it away. */
const NOISE_ABOVE_KMH = 20;
const NOISE_SAMPLES = 4000;
/**
 * A receiver slower than the file, whose positions were joined up, looks noiseless from sample to sample: the noise is also looked
 * for over these spans, and only as many positions are kept as the receiver gave.
 */
const SLOW_RECEIVER_S = [0.1, 0.2];
/** It counts as such when the noise over the span is above this and so many times that from sample to sample. */
const BLIND_M = 0.05;
const BLIND_FACTOR = 3;

/**
 * Picks the samples whose position counts: a receiver slower than the file repeats its last position, and single wild ones happen.
 *
 * @returns null where the run has no positions, or fewer than 8 that count
 */
export function freshPositions(channels: Channels): Positions | null {
	const { xM, yM, timeS, speedKmh } = channels;
	if (!xM || !yM) return null;
	const sample = new Int32Array(xM.length);
	let count = 0;
	let jumps = 0;
	let firstJump = -1;
	let last = -1;
	for (let i = 0; i < xM.length; i++) {
		if (!(Number.isFinite(xM[i]) && Number.isFinite(yM[i]))) continue;
		if (last >= 0) {
			const dx = xM[i] - xM[last];
			const dy = yM[i] - yM[last];
			if (dx === 0 && dy === 0 && speedKmh[i] > STANDING_KMH) continue;
			const apartS = timeS[i] - timeS[last];
			const speed = Math.max(speedKmh[i], speedKmh[last], 0) || 0;
			const reach = (STEP_FACTOR * speed * apartS) / KMH_PER_MPS + STEP_SLACK_M;
			if (dx * dx + dy * dy > reach * reach && apartS < BELIEVE_AFTER_S) {
				jumps++;
				if (firstJump < 0) firstJump = i;
				continue;
			}
		}
		sample[count++] = i;
		last = i;
	}
	if (count < 8) return null;
	let kept = count === sample.length ? sample : sample.slice(0, count);
	let noiseM = noiseOf(kept, channels, 1);
	for (const span of SLOW_RECEIVER_S) {
		const stride = Math.round(span * channels.sampleRateHz);
		if (stride < 2 || kept.length < 16 * stride) continue;
		const slower = noiseOf(kept, channels, stride);
		if (!(slower > BLIND_M && slower > BLIND_FACTOR * noiseM)) continue;
		kept = kept.filter((_, j) => j % stride === 0);
		noiseM = slower;
		break;
	}
	// a run without stale positions is not copied: it may be an hour long
	if (kept.length === xM.length) return { sample: kept, xM, yM, noiseM, jumps, firstJump };
	const x = new Float64Array(kept.length);
	const y = new Float64Array(kept.length);
	for (let j = 0; j < kept.length; j++) {
		x[j] = xM[kept[j]];
		y[j] = yM[kept[j]];
	}
	return { sample: kept, xM: x, yM: y, noiseM, jumps, firstJump };
}

/**
 * Noise from fourth differences, in which motion cancels and white noise of variance σ² has variance 70 σ². The median is used,
 * so that the corners, where motion does not quite cancel at 10 Hz, do not count.
 *
 * @param stride every how many positions make a difference
 */
function noiseOf(sample: Int32Array, { timeS, speedKmh, xM, yM }: Channels, stride: number): number {
	if (!xM || !yM) return 0;
	const every = Math.max(1, Math.floor(sample.length / NOISE_SAMPLES));
	const size = new Float64Array(Math.ceil(sample.length / every));
	let count = 0;
	for (let j = 2 * stride; j + 2 * stride < sample.length; j += every) {
		const a = sample[j - 2 * stride];
		const b = sample[j - stride];
		const c = sample[j];
		const d = sample[j + stride];
		const e = sample[j + 2 * stride];
		const dt = timeS[c] - timeS[b];
		if (!(speedKmh[c] > NOISE_ABOVE_KMH)) continue;
		if (Math.abs(timeS[e] - timeS[a] - 4 * dt) > 0.1 * dt) continue;
		const fourthX = xM[a] - 4 * xM[b] + 6 * xM[c] - 4 * xM[d] + xM[e];
		const fourthY = yM[a] - 4 * yM[b] + 6 * yM[c] - 4 * yM[d] + yM[e];
		size[count++] = fourthX * fourthX + fourthY * fourthY;
	}
	if (count === 0) return 0;
	// two coordinates: the squared length over its variance follows χ² with two degrees, whose median is 2 ln 2
	return Math.sqrt(quantile(size.subarray(0, count), 0.5) / (2 * Math.LN2) / 70);
}
