/** Enough triples for a median to 2 %; more only cost time. */
const TRIPLES = 3000;
/** Standard deviation of a normal variable per median of its absolute value. */
const SD_PER_MEDIAN = 1.4826;

export interface NoiseOptions {
	/** which samples may take part; a triple counts when all three do */
	counts?: (value: number) => boolean;
	/** samples between the members of a triple */
	lag?: number;
}

/**
 * Standard deviation of the white noise on a signal, whatever the signal does: from the median of the second differences, which
 * a straight course leaves at 0 and white noise of s.d. σ makes √6 σ. Robust against corners and steps.
 *
 * @returns in the signal's unit; 0 where under 8 triples can be read
 */
export function noiseLevel(values: Float64Array, options: NoiseOptions = {}): number {
	return secondDifferences(values, options).sd;
}

/** The noise level, and by how much the largest tenth of the differences exceeds their median: 2.4 for noise, more for movement. */
function secondDifferences(
	values: Float64Array,
	{ counts = () => true, lag = 1 }: NoiseOptions
): { sd: number; tail: number } {
	const stride = Math.max(1, Math.floor(values.length / (2 * TRIPLES)));
	const sizes = new Float64Array(Math.ceil(values.length / stride));
	let found = 0;
	for (let i = lag; i + lag < values.length; i += stride) {
		const before = values[i - lag];
		const here = values[i];
		const after = values[i + lag];
		if (counts(before) && counts(here) && counts(after)) {
			const second = Math.abs(after - 2 * here + before);
			if (second >= 0) sizes[found++] = second;
		}
	}
	if (found < 8) return { sd: 0, tail: 0 };
	const sorted = sizes.subarray(0, found).sort();
	const median = sorted[found >> 1];
	return { sd: (SD_PER_MEDIAN * median) / Math.sqrt(6), tail: sorted[Math.floor(0.9 * found)] / median };
}

const isPressed = (value: number) => value > 10 && value < 97;
const isAtRest = (value: number) => value < 3;

/**
 * Noise of a pedal in % of its travel. At rest a pedal's noise is often cut off at 0, so it counts for up to twice what is seen
 * there; where it is pressed, what grows with the distance between samples is movement, and what does not is noise.
 *
 * @param pct pedal from its rest level; NaN is left out
 */
export function pedalNoise(pct: Float64Array): number {
	const atRest = noiseLevel(pct, { counts: isAtRest });
	const near = secondDifferences(pct, { counts: isPressed });
	const far = noiseLevel(pct, { counts: isPressed, lag: 2 });
	const pressed = far < 1.6 * near.sd ? near.sd : 0;
	if (atRest > 0.02) return Math.min(Math.max(pressed, atRest), 2 * atRest);
	return pressed <= LARGEST_SENSOR_NOISE_PCT && near.tail < LONGEST_TAIL ? pressed : 0;
}

/** A pedal that is silent at rest and jumps by more, or much more at times than at others, is being pulsed: an anti-lock system works at the sampling rate. */
const LARGEST_SENSOR_NOISE_PCT = 1;
const LONGEST_TAIL = 4;
