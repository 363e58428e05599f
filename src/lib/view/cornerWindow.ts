import type { PlacedCorner } from './placedCorner.ts';

/** The stretch that a card draws, in unwrapped whole metres. */
export interface CornerWindow {
	fromM: number;
	toM: number;
	/** where the exit's span really ends, when the card cuts it; else null */
	exitGoesOnToM: number | null;
}

export interface WindowOptions {
	/** m before the earlier onset */
	leadM?: number;
	/** m after the span's end */
	tailM?: number;
	/** the widest window */
	widestM?: number;
	/** m on either side of the lap that the grids still know */
	marginM: number;
	lengthM: number;
}

/** Even a long corner is shown to its end, with room to see the car straighten. */
const AFTER_END_M = 20;

/**
 * The window of a corner card: from before the earlier onset to the end of the exit's span, at most 260 m wide. A longer exit is
 * cut, but never before the corner's end: a long sweeper takes the metres that it needs.
 */
export function cornerWindow(
	places: PlacedCorner,
	{ leadM = 16, tailM = 6, widestM = 260, marginM, lengthM }: WindowOptions
): CornerWindow {
	const lowest = 1 - marginM;
	const highest = Math.floor(lengthM) + marginM - 1;
	const fromM = Math.max(lowest, Math.floor(places.beginM - leadM));
	const spanEndM = places.spans.endM;
	// A corner that the line cuts ends after its own span.
	const natural = Math.ceil(
		Math.max(spanEndM + tailM, places.endM > spanEndM ? places.endM + AFTER_END_M : places.endM)
	);
	const widest = Math.max(fromM + widestM, Math.ceil(places.endM + AFTER_END_M));
	const toM = Math.min(highest, natural, widest);
	return { fromM, toM, exitGoesOnToM: spanEndM > toM ? Math.round(spanEndM) : null };
}
