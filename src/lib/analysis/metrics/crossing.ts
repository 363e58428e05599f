/** A signal over time with what is known of its noise. Equal lengths; times increase; gaps are NaN. */
export interface Signal {
	timeS: Float64Array;
	values: Float64Array;
	/** standard deviation, in the signal's unit */
	noise: number;
}

/** A moment and how far off sampling and noise may put it. */
export interface Moment {
	timeS: number;
	plusMinusS: number;
}

/** A change per sample below this share of the crossing's own counts as flat. */
const FLAT_SHARE = 0.2;
const FLAT_LARGEST = 0.25;
/** Beyond this many s.d. a step is a movement and not noise. */
const CLEAR_OF_NOISE = 6;

/**
 * When a signal crosses a level between samples i and i + 1.
 *
 * Pedals move from rest in ramps, and a ramp rarely begins on a sample: straight interpolation between the last sample at rest and
 * the first one on the ramp puts its foot too early by up to a sample. So where one side is flat and the other a ramp, the ramp is
 * drawn on into the interval. Where the ramp is too short to show its slope, the slope lies between what the samples demand and
 * infinity; the quickest stroke seen at this place, if known, narrows that.
 *
 * @param signal values[i] and values[i + 1] lie on different sides of the level
 * @param i      index before the crossing
 * @param level  in the signal's unit
 * @param quickest  slope of the quickest strokes seen elsewhere, unit per s, null where unknown
 * @example at 10 Hz 0, 0, 25, 60, 95 crosses 5 at 0.143 s: the ramp of 350 per s, drawn back from 25
 */
export function crossing(signal: Signal, i: number, level: number, quickest: number | null = null): Moment {
	const { timeS, values, noise } = signal;
	const start = timeS[i];
	const end = timeS[i + 1];
	const lengthS = end - start;
	const change = values[i + 1] - values[i];
	const size = Math.abs(change);
	const share = (level - values[i]) / change;
	if (!(size > CLEAR_OF_NOISE * noise)) {
		return { timeS: start + share * lengthS, plusMinusS: lengthS / 4 + (noise / size) * lengthS };
	}
	const flat = Math.max(Math.min(FLAT_LARGEST, FLAT_SHARE * size), 3 * noise);
	const before = slopeOf(signal, i - 1);
	const after = slopeOf(signal, i + 1);
	const flatBefore = Math.abs(before) * lengthS <= flat;
	const flatAfter = Math.abs(after) * lengthS <= flat;
	const least = size / lengthS;
	if (flatBefore && flatAfter) {
		// the whole stroke lies inside, anywhere
		const strokeS = Math.min(lengthS, size / (quickest ?? 2 * least));
		return { timeS: start + (lengthS - strokeS) / 2 + share * strokeS, plusMinusS: (lengthS - strokeS) / 2 };
	}
	if (flatBefore === flatAfter) {
		return { timeS: start + share * lengthS, plusMinusS: lengthS / 8 + (noise / size) * lengthS };
	}
	const ramp = flatBefore ? after : before;
	const farther = flatBefore ? slopeOf(signal, i + 2) : slopeOf(signal, i - 2);
	const sameWay = Math.sign(ramp) === Math.sign(change);
	// a ramp seen over one step only may have reached its end within it: then its slope is a lower bound
	const whole = Math.sign(farther) === Math.sign(ramp) && Math.abs(farther) > 0.5 * Math.abs(ramp);
	const resolved = sameWay && Math.abs(ramp) >= 0.98 * least;
	const lowest = sameWay ? Math.max(least, Math.abs(ramp)) : least;
	const slope = resolved && whole ? Math.abs(ramp) : Math.max(quickest ?? (resolved ? 1.4 : 2) * lowest, lowest);
	const reach = Math.abs(flatBefore ? values[i + 1] - level : level - values[i]);
	const fromRampS = Math.min(reach / slope, lengthS);
	const at = flatBefore ? end - fromRampS : start + fromRampS;
	// unresolved, the crossing lies anywhere from the ramp's sample to where the flattest ramp that fits puts it
	const flattestS = Math.min(reach / lowest, lengthS);
	const openS = resolved && whole ? 0.1 * lengthS : Math.max(flattestS - fromRampS, fromRampS);
	return { timeS: at, plusMinusS: openS + (2 * noise) / slope };
}

/** Slope of the step that begins at sample i; 0 outside the signal and next to a gap. */
function slopeOf({ timeS, values }: Signal, i: number): number {
	if (!(i >= 0 && i + 1 < values.length)) return 0;
	const slope = (values[i + 1] - values[i]) / (timeS[i + 1] - timeS[i]);
	return Number.isFinite(slope) ? slope : 0;
}
