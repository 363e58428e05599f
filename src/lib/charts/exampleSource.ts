import type { LapGrid } from '$lib/analysis/model';
import { speedIn } from '$lib/format/speed';
import type { ComparisonView } from '$lib/schemas/views';
import type { CornerCard } from '$lib/view/cornerCard';
import { deltaAt, gridValue, metresBetween, type GridColumn } from '$lib/view/gridValue';
import type { CursorTraces, TraceSource } from './traceSource';

/** Traces read straight off grids that are at hand: for the gallery and for tests. */
export function exampleSource(view: ComparisonView, card: CornerCard): TraceSource {
	return { load: () => Promise.resolve(gridTraces(view, card)) };
}

function gridTraces(view: ComparisonView, { window, speedUnit, delta }: CornerCard): CursorTraces {
	const places = metresBetween(window.fromM, window.toM);
	const side = (grid: LapGrid): CursorTraces['driver'] => {
		const read = (column: GridColumn): Float64Array | null =>
			grid[column] === null ? null : Float64Array.from(places, (placeM) => gridValue(grid, column, placeM));
		const speed = read('speedKmh');
		return {
			brake: read('brakePct'),
			speed: speed?.map((value) => speedIn(value, speedUnit)) ?? null,
			throttle: read('throttlePct'),
			steering: read('steeringDeg')
		};
	};
	const { driverGrid, referenceGrid } = view;
	const zero = deltaAt(driverGrid, referenceGrid, delta.fromM);
	return {
		fromM: window.fromM,
		driver: side(driverGrid),
		reference: side(referenceGrid),
		deltaS: Float64Array.from(places, (placeM) =>
			placeM < delta.fromM ? NaN : deltaAt(driverGrid, referenceGrid, placeM) - zero
		)
	};
}
