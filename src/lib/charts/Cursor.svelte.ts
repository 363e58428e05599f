import type { CornerCard, CursorReading } from '$lib/view/cornerCard';
import type { CursorTraces } from './traceSource';

/** Places to which the cursor snaps, m: the step of the grid. */
const STEP_M = 1;

/**
 * The one cursor of a card: a place on the path that plan, rows and ruler share, and what is read there. Before the traces have
 * come it stands where the server put it and knows what the server read there.
 */
export class Cursor {
	readonly fromM: number;
	readonly toM: number;
	readonly #initial: CursorReading;
	#placeM = $state(0);
	#traces = $state.raw<CursorTraces | null>(null);
	readonly #reading = $derived.by(() => this.#read());

	constructor(card: Pick<CornerCard, 'window' | 'cursor'>) {
		this.fromM = card.window.fromM;
		this.toM = card.window.toM;
		this.#initial = card.cursor;
		this.#placeM = card.cursor.placeM;
	}

	get placeM(): number {
		return this.#placeM;
	}

	/** Where the cursor stands across the window, 0–1. */
	get share(): number {
		return (this.#placeM - this.fromM) / (this.toM - this.fromM);
	}

	get reading(): CursorReading {
		return this.#reading;
	}

	/** Are all places readable, or only the one that the server read? */
	get ready(): boolean {
		return this.#traces !== null;
	}

	/** Moves to the whole metre nearest to a place, within the window. */
	moveTo(placeM: number): void {
		if (!Number.isFinite(placeM)) return;
		this.#placeM = Math.min(this.toM, Math.max(this.fromM, Math.round(placeM / STEP_M) * STEP_M));
	}

	moveToShare(share: number): void {
		this.moveTo(this.fromM + share * (this.toM - this.fromM));
	}

	step(byM: number): void {
		this.moveTo(this.#placeM + byM);
	}

	receive(traces: CursorTraces): void {
		this.#traces = traces;
	}

	#read(): CursorReading {
		const placeM = this.#placeM;
		if (placeM === this.#initial.placeM) return this.#initial;
		const unknown = { brake: null, speed: null, throttle: null, steering: null };
		if (this.#traces === null) return { placeM, driver: unknown, reference: unknown, deltaS: null };
		const { fromM, driver, reference, deltaS } = this.#traces;
		const at = Math.round(placeM - fromM);
		const known = (values: Float32Array | Float64Array | null): number | null => {
			const value = values?.[at] ?? NaN;
			return Number.isFinite(value) ? value : null;
		};
		const side = (traces: CursorTraces['driver']): CursorReading['driver'] => ({
			brake: known(traces.brake),
			speed: known(traces.speed),
			throttle: known(traces.throttle),
			steering: known(traces.steering)
		});
		return { placeM, driver: side(driver), reference: side(reference), deltaS: known(deltaS) };
	}
}
