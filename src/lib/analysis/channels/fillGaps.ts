/**
 * Fills missing values between two known ones by straight lines, as long as the gap is short enough to be bridged honestly.
 *
 * @param values NaN for missing; changed in place
 * @param timeS strictly increasing
 * @param maxGapS longest span between the two known values, s
 * @returns the longest gap left open, s, and the index where it begins; 0 and −1 where there is none
 */
export function fillGaps(values: Float64Array, timeS: Float64Array, maxGapS: number): { longestS: number; at: number } {
	let known = -1;
	let longestS = 0;
	let at = -1;
	for (let i = 0; i < values.length; i++) {
		if (Number.isNaN(values[i])) continue;
		if (known >= 0 && i > known + 1) {
			const span = timeS[i] - timeS[known];
			if (span <= maxGapS) {
				const slope = (values[i] - values[known]) / span;
				for (let k = known + 1; k < i; k++) values[k] = values[known] + slope * (timeS[k] - timeS[known]);
			} else if (span > longestS) [longestS, at] = [span, known + 1];
		}
		known = i;
	}
	return { longestS, at };
}

/**
 * Fills missing values between known ones by a cubic through the neighbours (slopes by parabolas, so that uneven steps do no harm): for positions of a
 * receiver that is slower than the rest of the logger, where a straight line would cut the corners.
 *
 * @param values NaN for missing; changed in place
 * @param maxGapS longest span that is bridged, s
 */
export function fillSmooth(values: Float64Array, timeS: Float64Array, maxGapS: number): void {
	const known: number[] = [];
	for (let i = 0; i < values.length; i++) if (!Number.isNaN(values[i])) known.push(i);
	if (known.length === values.length || known.length < 2) return;
	/** Slope of the parabola through a known value and its two known neighbours. */
	const slopeAt = (k: number): number => {
		const [before, at, after] = [known[Math.max(0, k - 1)], known[k], known[Math.min(known.length - 1, k + 1)]];
		if (before === at || after === at) return (values[after] - values[before]) / (timeS[after] - timeS[before]);
		const [behind, ahead] = [timeS[at] - timeS[before], timeS[after] - timeS[at]];
		const [rise, climb] = [(values[at] - values[before]) / behind, (values[after] - values[at]) / ahead];
		return (rise * ahead + climb * behind) / (behind + ahead);
	};
	for (let k = 0; k + 1 < known.length; k++) {
		const [a, b] = [known[k], known[k + 1]];
		const span = timeS[b] - timeS[a];
		if (b === a + 1 || span > maxGapS) continue;
		const [slopeA, slopeB] = [slopeAt(k), slopeAt(k + 1)];
		const [from, to] = [values[a], values[b]];
		for (let i = a + 1; i < b; i++) {
			const u = (timeS[i] - timeS[a]) / span;
			const [u2, u3] = [u * u, u * u * u];
			values[i] =
				(2 * u3 - 3 * u2 + 1) * from +
				(u3 - 2 * u2 + u) * span * slopeA +
				(3 * u2 - 2 * u3) * to +
				(u3 - u2) * span * slopeB;
		}
	}
}

/** Carries the last known value forward, and the first one back: for lap numbers and gears. */
export function holdValues(values: Float64Array): void {
	let last = values.find((value) => !Number.isNaN(value)) ?? NaN;
	for (let i = 0; i < values.length; i++) {
		if (Number.isNaN(values[i])) values[i] = last;
		else last = values[i];
	}
}
