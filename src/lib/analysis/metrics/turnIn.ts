import { sampleBefore } from '../trace/placeTime.ts';
import type { Signal } from './crossing.ts';

/** Straight running before a corner is looked at over this long. */
const APPROACH_S = 1.5;
/** The course from here to the foot is drawn on as a straight line. */
const LOW_SHARE = 0.1;
const HIGH_SHARE = 0.3;
const TOP_SHARE = 0.5;
/** The foot of the turn lies at most this far before the low crossing. */
const DRAWN_ON_S = 0.6;

/**
 * When a lap turns in: where its own steering, or its line's curvature, leaves the level of the approach for good. The last crossing of
 * 10 % of the corner's largest value before half of it is reached, drawn back through 30 % to the level of the approach.
 *
 * @param timeS   the run's time
 * @param turning steering or curvature, left positive, with its noise
 * @param sign    1 for a left corner, −1 for a right one
 * @param span    corner start, apex and end, and the moment before which the corner before was being driven
 * @returns s from the run's first sample; null where the signal says nothing
 */
export function turnIn(
	{ timeS, values: turning, noise }: Signal,
	sign: 1 | -1,
	span: { notBeforeS: number; startS: number; apexS: number; endS: number }
): number | null {
	const from = Math.max(0, sampleBefore(timeS, Math.max(span.notBeforeS, span.startS - APPROACH_S)) + 1);
	const to = Math.min(timeS.length - 1, sampleBefore(timeS, span.endS));
	if (!(to - from >= 3 && sampleBefore(timeS, span.apexS) > from)) return null;
	const values = new Float64Array(to - from + 1);
	let largest = 0;
	for (let i = from; i <= to; i++) {
		const value = sign * turning[i];
		if (Number.isNaN(value)) return null;
		values[i - from] = value;
		if (value > largest) largest = value;
	}
	const before = values.slice(0, Math.max(2, sampleBefore(timeS, span.startS - 0.2) - from + 1));
	// steering out of an opposite corner is no approach: straight is
	const approach = Math.max(0, before.sort()[before.length >> 1]);
	const height = largest - approach;
	if (!(height > 6 * noise)) return null;
	const rises = (share: number, until: number) => {
		const level = approach + share * height;
		for (let i = until; i > 0; i--) {
			if (values[i] >= level && values[i - 1] < level) {
				const part = (level - values[i - 1]) / (values[i] - values[i - 1]);
				return { index: i, atS: timeS[from + i - 1] + part * (timeS[from + i] - timeS[from + i - 1]) };
			}
		}
		return null;
	};
	let top = 1;
	while (top < values.length - 1 && values[top] < approach + TOP_SHARE * height) top++;
	const high = rises(HIGH_SHARE, top);
	const low = rises(LOW_SHARE, high ? high.index : top);
	if (!low) return timeS[from];
	const rampS = high ? (high.atS - low.atS) * (LOW_SHARE / (HIGH_SHARE - LOW_SHARE)) : 0;
	return Math.max(low.atS - Math.min(Math.max(rampS, 0), DRAWN_ON_S), timeS[from]);
}
