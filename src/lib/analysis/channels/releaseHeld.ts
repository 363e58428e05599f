/** Fewest steps of a staircase that prove it one. */
const MIN_STEPS = 40;
/** Share of the steps that must have the usual length, give or take a sample where it is long. */
const REGULAR_SHARE = 0.9;
const LONGEST_STEP = 60;
/** A staircase of steps of two repeats every second value; fewer repeats, and the runs need not be looked at. */
const LEAST_REPEATED = 0.4;
const MAX_LOOKS = 10_000;

/**
 * Finds a channel that was sampled more slowly than the file and repeats its last value in between (a staircase of equal steps), and
 * takes the repeats out, so that they can be filled by lines: else every onset is late by up to a step and every slope is a cliff.
 *
 * Quantised channels repeat values too, but in runs of all lengths; they are left alone.
 *
 * @param values changed in place: NaN for repeats
 * @returns the step in samples; 1 where the channel is no staircase
 */
export function releaseHeld(values: Float64Array): number {
	if (repeatedShare(values) < LEAST_REPEATED) return 1;
	const counts = new Int32Array(LONGEST_STEP + 1);
	let steps = 0;
	forEachRun(values, (_, length) => {
		if (length > LONGEST_STEP) return;
		counts[length]++;
		steps++;
	});
	if (steps < MIN_STEPS || counts[1] > 0.1 * steps) return 1;
	let usual = 2;
	for (let length = 2; length <= LONGEST_STEP; length++) if (counts[length] > counts[usual]) usual = length;
	const reach = usual >= 4 ? 1 : 0;
	let regular = 0;
	// A value that stays the same over several of its own samples makes a run of a multiple.
	for (let length = 1; length <= LONGEST_STEP; length++) {
		const times = Math.round(length / usual);
		if (times >= 1 && Math.abs(length - times * usual) <= reach) regular += counts[length];
	}
	if (regular < REGULAR_SHARE * steps) return 1;
	forEachRun(values, (start, length) => {
		// Longer runs are a level that holds: only its last step is let go, so that it stays level up to there.
		const end = start + length;
		if (end === values.length) return;
		const from = length <= usual + reach ? start + 1 : end - usual + 1;
		for (let i = from; i < end; i++) values[i] = NaN;
	});
	return usual;
}

function repeatedShare(values: Float64Array): number {
	const stride = Math.max(1, Math.floor(values.length / MAX_LOOKS));
	let [repeated, looks] = [0, 0];
	for (let i = 1; i < values.length; i += stride) {
		looks++;
		if (values[i] === values[i - 1]) repeated++;
	}
	return repeated / Math.max(1, looks);
}

/** Calls back for each run of equal values. */
function forEachRun(values: Float64Array, call: (start: number, length: number) => void): void {
	let start = 0;
	for (let i = 1; i <= values.length; i++) {
		if (i < values.length && values[i] === values[start]) continue;
		if (!Number.isNaN(values[start])) call(start, i - start);
		start = i;
	}
}
