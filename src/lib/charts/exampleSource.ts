import type { LapGrid } from '$lib/analysis/model';
import { speedIn } from '$lib/format/speed';
import type { ComparisonView } from '$lib/schemas/views';
import type { CornerCard } from '$lib/view/cornerCard';
import { deltaAt, gridValue, metresBetween, type GridColumn } from '$lib/view/gridValue';
import type { CursorTraces, OtherLap, TraceSource } from './traceSource';

type Drawn = Pick<CornerCard, 'window' | 'speedUnit' | 'delta'>;

/** How much slower each further lap of an example is. */
const OTHERS = [
	{ number: 3, share: 0.985 },
	{ number: 5, share: 0.97 }
];

/** Traces read straight off grids that are at hand: for the gallery and for tests. */
export function exampleSource(view: ComparisonView, card: Drawn): TraceSource {
	return {
		load: () => Promise.resolve(gridTraces(view, card)),
		others: {
			numbers: OTHERS.map(({ number }) => number),
			load: () => Promise.resolve(OTHERS.map((other) => otherLap(view.driverGrid, card, other)))
		}
	};
}

function sideOf(grid: LapGrid, { window, speedUnit }: Drawn): CursorTraces['driver'] {
	const places = metresBetween(window.fromM, window.toM);
	const read = (column: GridColumn): Float64Array | null =>
		grid[column] === null ? null : Float64Array.from(places, (placeM) => gridValue(grid, column, placeM));
	return {
		brake: read('brakePct'),
		speed: read('speedKmh')?.map((value) => speedIn(value, speedUnit)) ?? null,
		throttle: read('throttlePct'),
		steering: read('steeringDeg')
	};
}

function otherLap(grid: LapGrid, card: Drawn, { number, share }: (typeof OTHERS)[number]): OtherLap {
	const columns = sideOf(grid, card);
	return { number, columns: { ...columns, speed: columns.speed?.map((value) => value * share) ?? null } };
}

function gridTraces({ driverGrid, referenceGrid }: ComparisonView, card: Drawn): CursorTraces {
	const { window, delta } = card;
	const apartS = Float64Array.from(metresBetween(window.fromM, window.toM), (placeM) =>
		deltaAt(driverGrid, referenceGrid, placeM)
	);
	const zero = deltaAt(driverGrid, referenceGrid, delta.fromM);
	return {
		fromM: window.fromM,
		driver: sideOf(driverGrid, card),
		reference: sideOf(referenceGrid, card),
		deltaS: apartS.map((value, i) => (window.fromM + i < delta.fromM ? NaN : value - zero)),
		apartS
	};
}
