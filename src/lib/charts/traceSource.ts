import type { RowKey } from '$lib/view/traceRows';

type Column = Float32Array | Float64Array | null;

/** Both laps under the cursor: one entry a metre from `fromM` on, in the units of the rows; NaN is a gap, null an absent channel. */
export interface CursorTraces {
	fromM: number;
	driver: Record<RowKey, Column>;
	reference: Record<RowKey, Column>;
	/** Δ since the corner's span began, s */
	deltaS: Float32Array | Float64Array;
	/** Δ since both crossed the line, s: known before the span too */
	apartS: Float32Array | Float64Array;
}

/** A further lap of the driver's run, drawn faintly; columns as in CursorTraces. */
export interface OtherLap {
	/** number of the lap in its run */
	number: number;
	columns: Record<RowKey, Column>;
}

/** Where a card gets the numbers for its cursor from: the API in the product, the examples themselves in the gallery. */
export interface TraceSource {
	/** @throws the reason of the abort, or whatever the transport throws; the card then keeps the server's reading */
	load(signal: AbortSignal): Promise<CursorTraces>;
	/** the run's further clean laps, which are fetched when somebody asks for them; absent where there are none to show */
	readonly others?: {
		/** numbers of the laps in their run */
		readonly numbers: readonly number[];
		/** @throws as the source's own */
		load(signal: AbortSignal): Promise<OtherLap[]>;
	};
}
