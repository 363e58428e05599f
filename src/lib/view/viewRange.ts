/** A stretch of the path, m. */
export interface ViewRange {
	fromM: number;
	toM: number;
}

/** Narrower than this a chart of a grid of 1 m shows single samples and nothing else. */
export const NARROWEST_M = 20;

/**
 * A narrower or wider view of a window: the place under the fingers stays where it is, and the view never leaves the window.
 *
 * @param view   what is shown
 * @param window what there is to show
 * @param factor > 1 comes nearer, < 1 goes away
 * @param aboutM the place that stays
 * @throws {RangeError} if `factor` is not > 0
 * @example zoomRange({ fromM: 0, toM: 100 }, { fromM: 0, toM: 100 }, 2, 50) // => { fromM: 25, toM: 75 }
 */
export function zoomRange(view: ViewRange, window: ViewRange, factor: number, aboutM: number): ViewRange {
	if (!(factor > 0)) throw new RangeError(`zoomRange requires factor > 0, got ${factor}`);
	const widest = window.toM - window.fromM;
	const width = view.toM - view.fromM;
	const next = Math.min(widest, Math.max(Math.min(widest, NARROWEST_M), width / factor));
	const about = Math.min(view.toM, Math.max(view.fromM, aboutM));
	const share = width > 0 ? (about - view.fromM) / width : 0.5;
	return within(about - share * next, next, window);
}

/** The view moved along by some metres, as far as the window goes. */
export function panRange(view: ViewRange, window: ViewRange, byM: number): ViewRange {
	return within(view.fromM + byM, view.toM - view.fromM, window);
}

/** The view moved no further than needed for a place to be in it, with a twelfth of the view ahead of it. */
export function rangeHolding(view: ViewRange, window: ViewRange, placeM: number): ViewRange {
	const width = view.toM - view.fromM;
	if (placeM >= view.fromM && placeM <= view.toM) return view;
	const ahead = width / 12;
	return within(placeM < view.fromM ? placeM - ahead : placeM + ahead - width, width, window);
}

function within(fromM: number, width: number, window: ViewRange): ViewRange {
	const from = Math.min(window.toM - width, Math.max(window.fromM, fromM));
	return { fromM: from, toM: from + width };
}
