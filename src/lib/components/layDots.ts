export interface PlacedDot {
	/** index in the input */
	index: number;
	/** 0–100 from the quickest to the slowest shown */
	atPct: number;
	/** 0 on the line, 1, 2 … above it where dots would cover each other */
	level: number;
}

export interface DotStrip {
	dots: PlacedDot[];
	/** too slow to share the scale: indices, quickest first */
	beyond: number[];
	firstS: number;
	lastS: number;
}

/** Times slower than this beyond the quickest do not share the scale: one spin must not squeeze the rest into a point. */
const WIDEST_SHARE = 0.04;

/**
 * Lays lap times as dots on a line, from the quickest to the slowest, stacked where they would cover each other.
 *
 * @param timesS s, > 0, in any order; what is not finite is left out
 * @param gapPct least distance of two dots of one level, in % of the line's length
 * @returns dots in order of time; with one time, a dot in the middle
 */
export function layDots(timesS: readonly number[], gapPct: number): DotStrip {
	const order = timesS
		.map((timeS, index) => ({ timeS, index }))
		.filter(({ timeS }) => Number.isFinite(timeS))
		.sort((a, b) => a.timeS - b.timeS);
	if (order.length === 0) return { dots: [], beyond: [], firstS: NaN, lastS: NaN };
	const firstS = order[0].timeS;
	const shown = order.filter(({ timeS }) => timeS <= firstS * (1 + WIDEST_SHARE));
	const lastS = shown[shown.length - 1].timeS;
	const lastAt: number[] = [];
	const dots = shown.map(({ timeS, index }) => {
		const atPct = lastS > firstS ? ((timeS - firstS) / (lastS - firstS)) * 100 : 50;
		let level = lastAt.findIndex((at) => atPct - at >= gapPct);
		if (level < 0) level = lastAt.length;
		lastAt[level] = atPct;
		return { index, atPct, level };
	});
	return { dots, beyond: order.slice(shown.length).map(({ index }) => index), firstS, lastS };
}
