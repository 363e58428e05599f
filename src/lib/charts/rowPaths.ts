import { scaleLinear } from 'd3-scale';
import { tracePath } from '$lib/view/geometry/tracePath';
import { UNITS_PER_PX, WIDTH_UNITS } from '$lib/view/geometry/units';
import { metresBetween } from '$lib/view/gridValue';
import type { TraceRow } from '$lib/view/traceRows';
import type { ViewRange } from '$lib/view/viewRange';

/** The box of a row's drawing that a view shows: path data are as wide as the whole window. */
export function rowViewBox(view: ViewRange, window: ViewRange, heightPx: number): string {
	const perM = WIDTH_UNITS / (window.toM - window.fromM);
	const left = Math.round((view.fromM - window.fromM) * perM);
	const width = Math.max(1, Math.round((view.toM - view.fromM) * perM));
	return `${left} 0 ${width} ${heightPx * UNITS_PER_PX}`;
}

/**
 * A channel's line drawn from its values at hand, over a range of the path and stretched to the width of the row's drawing.
 *
 * @param values one a metre from `firstM` on
 */
export function rowPath(
	values: ArrayLike<number> | null,
	firstM: number,
	range: ViewRange,
	row: Pick<TraceRow, 'domain' | 'heightPx'>
): string {
	if (values === null) return '';
	const placesM = metresBetween(Math.floor(range.fromM), Math.ceil(range.toM));
	return tracePath({
		placesM,
		values: placesM.map((placeM) => values[placeM - firstM] ?? NaN),
		x: scaleLinear([range.fromM, range.toM], [0, WIDTH_UNITS]),
		y: scaleLinear(row.domain, [row.heightPx * UNITS_PER_PX, 0])
	});
}
