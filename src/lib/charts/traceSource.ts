import type { RowKey } from '$lib/view/traceRows';

type Column = Float32Array | Float64Array | null;

/** Both laps under the cursor: one entry a metre from `fromM` on, in the units of the rows; NaN is a gap, null an absent channel. */
export interface CursorTraces {
	fromM: number;
	driver: Record<RowKey, Column>;
	reference: Record<RowKey, Column>;
	/** Δ since the corner's span began, s */
	deltaS: Float32Array | Float64Array;
}

/** Where a card gets the numbers for its cursor from: the API in the product, the examples themselves in the gallery. */
export interface TraceSource {
	/** @throws the reason of the abort, or whatever the transport throws; the card then keeps the server's reading */
	load(signal: AbortSignal): Promise<CursorTraces>;
}
