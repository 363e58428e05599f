import type { CornerCard, CursorReading } from '$lib/view/cornerCard';
import { stretchFigures, type StretchFigures } from '$lib/view/stretchFigures';
import { panRange, rangeHolding, zoomRange, type ViewRange } from '$lib/view/viewRange';
import type { CursorTraces, OtherLap } from './traceSource';

/** Places to which the cursor snaps, m: the step of the grid. */
const STEP_M = 1;
/** How much nearer one press of a key or a button comes. */
export const ZOOM_STEP = 1.5;

/**
 * The one cursor of a card: a place on the path that plan, rows and ruler share, and what is read there; with it the part of the
 * window that is in view, and the stretch that somebody marked. Before the traces have come it stands where the server put it and
 * knows what the server read there.
 */
export class Cursor {
	readonly fromM: number;
	readonly toM: number;
	readonly #initial: CursorReading;
	#placeM = $state(0);
	#view = $state.raw<ViewRange>({ fromM: 0, toM: 1 });
	/** the end that stays and the end that moves, m */
	#stretch = $state.raw<readonly [number, number] | null>(null);
	#traces = $state.raw<CursorTraces | null>(null);
	#others = $state.raw<readonly OtherLap[]>([]);
	readonly #reading = $derived.by(() => this.#read());
	readonly #figures = $derived(
		this.#stretch && this.#traces ? stretchFigures(this.#traces, [this.#stretch[0], this.#stretch[1]]) : null
	);

	constructor(card: Pick<CornerCard, 'window' | 'cursor'>) {
		this.fromM = card.window.fromM;
		this.toM = card.window.toM;
		this.#initial = card.cursor;
		this.#placeM = card.cursor.placeM;
		this.#view = { fromM: this.fromM, toM: this.toM };
	}

	get placeM(): number {
		return this.#placeM;
	}

	/** Where the cursor stands across the view, 0–1; outside while the view was moved away from it. */
	get share(): number {
		return this.shareOf(this.#placeM);
	}

	get reading(): CursorReading {
		return this.#reading;
	}

	/** Are all places readable, or only the one that the server read? */
	get ready(): boolean {
		return this.#traces !== null;
	}

	get traces(): CursorTraces | null {
		return this.#traces;
	}

	/** The part of the window that is shown. */
	get view(): ViewRange {
		return this.#view;
	}

	get isZoomed(): boolean {
		return this.#view.toM - this.#view.fromM < this.toM - this.fromM - 1e-6;
	}

	/** The marked stretch, its first place first; null where there is none. */
	get stretch(): ViewRange | null {
		if (this.#stretch === null) return null;
		const [a, b] = this.#stretch;
		return { fromM: Math.min(a, b), toM: Math.max(a, b) };
	}

	/** What the marked stretch says; null without one, and before the traces have come. */
	get figures(): StretchFigures | null {
		return this.#figures;
	}

	/** Further laps that are drawn faintly. */
	get others(): readonly OtherLap[] {
		return this.#others;
	}

	/** Where a place stands across the view, 0–1 within it. */
	shareOf(placeM: number): number {
		return (placeM - this.#view.fromM) / (this.#view.toM - this.#view.fromM);
	}

	/** Is a place in view? */
	isSeen(placeM: number): boolean {
		return placeM >= this.#view.fromM && placeM <= this.#view.toM;
	}

	/** The whole metre at a share of the view, within the window. */
	placeAt(share: number): number {
		return this.#whole(this.#view.fromM + share * (this.#view.toM - this.#view.fromM));
	}

	/** Moves to the whole metre nearest to a place, within the window; a nearer view follows. */
	moveTo(placeM: number): void {
		if (!Number.isFinite(placeM)) return;
		this.#placeM = this.#whole(placeM);
		if (this.isZoomed) this.#view = rangeHolding(this.#view, this, this.#placeM);
	}

	moveToShare(share: number): void {
		this.moveTo(this.placeAt(Math.min(1, Math.max(0, share))));
	}

	step(byM: number): void {
		this.moveTo(this.#placeM + byM);
	}

	/** Marks from one place to another; the cursor goes to the second. */
	mark(fromM: number, toM: number): void {
		if (!Number.isFinite(fromM)) return;
		this.moveTo(toM);
		this.#stretch = [this.#whole(fromM), this.#placeM];
	}

	/** Moves the stretch's last end on; without one it begins at the cursor. */
	extend(byM: number): void {
		const [anchor, end] = this.#stretch ?? [this.#placeM, this.#placeM];
		this.mark(anchor, end + byM);
	}

	unmark(): void {
		this.#stretch = null;
	}

	/** Comes nearer (> 1) or goes away (< 1) about a place, the cursor's unless told otherwise. */
	zoom(factor: number, aboutM = this.#placeM): void {
		this.#view = zoomRange(this.#view, this, factor, aboutM);
	}

	pan(byM: number): void {
		this.#view = panRange(this.#view, this, byM);
	}

	showWhole(): void {
		this.#view = { fromM: this.fromM, toM: this.toM };
	}

	receive(traces: CursorTraces): void {
		this.#traces = traces;
	}

	showOthers(laps: readonly OtherLap[]): void {
		this.#others = laps;
	}

	#whole(placeM: number): number {
		return Math.min(this.toM, Math.max(this.fromM, Math.round(placeM / STEP_M) * STEP_M));
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
