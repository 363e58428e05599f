import type { Cursor } from './Cursor.svelte';

/** A finger that rests this long marks a stretch instead of moving the cursor. */
const LONG_PRESS_MS = 450;
/** Less than this is a trembling hand, not a drag, px. */
const STILL_PX = 6;
/** A turn of the wheel by so many px comes nearer by a factor of e. */
const WHEEL_PX = 320;

type Point = Pick<PointerEvent, 'pointerId' | 'pointerType' | 'clientX'>;

/**
 * What hands do on the charts, as moves of the cursor: a mouse moves it and drags a stretch; a finger drags it, marks after a long
 * press, and two fingers zoom. Knows places on the screen, not elements.
 */
export class SurfaceGestures {
	readonly #cursor: Cursor;
	readonly #box: () => { left: number; width: number };
	/** pointers that are down, where they are now */
	readonly #down = new Map<number, number>();
	#pressedX = 0;
	#anchorM = 0;
	#doing: 'press' | 'follow' | 'mark' | 'pinch' | null = null;
	#timer: ReturnType<typeof setTimeout> | undefined;

	/** @param box left edge and width of the charts, px of the screen, asked anew on each move */
	constructor(cursor: Cursor, box: () => { left: number; width: number }) {
		this.#cursor = cursor;
		this.#box = box;
	}

	/** A mouse over the charts, no button down. */
	hover({ clientX }: Point): void {
		if (this.#doing === null) this.#cursor.moveToShare(this.#shareAt(clientX));
	}

	press(event: Point): void {
		this.#down.set(event.pointerId, event.clientX);
		clearTimeout(this.#timer);
		if (this.#down.size === 2) {
			this.#doing = 'pinch';
			return;
		}
		if (this.#down.size > 2) return;
		this.#pressedX = event.clientX;
		this.#cursor.moveToShare(this.#shareAt(event.clientX));
		this.#anchorM = this.#cursor.placeM;
		this.#doing = 'press';
		if (event.pointerType === 'mouse') return;
		this.#timer = setTimeout(() => {
			this.#doing = 'mark';
			this.#cursor.mark(this.#anchorM, this.#anchorM);
		}, LONG_PRESS_MS);
	}

	/** A pointer that is down has moved; others are ignored. */
	move(event: Point): void {
		const before = this.#down.get(event.pointerId);
		if (before === undefined) return;
		if (this.#doing === 'pinch') this.#pinch(event, before);
		this.#down.set(event.pointerId, event.clientX);
		if (this.#doing === 'press' && Math.abs(event.clientX - this.#pressedX) > STILL_PX) {
			clearTimeout(this.#timer);
			this.#doing = event.pointerType === 'mouse' ? 'mark' : 'follow';
		}
		if (this.#doing === 'follow') this.#cursor.moveToShare(this.#shareAt(event.clientX));
		else if (this.#doing === 'mark') this.#cursor.mark(this.#anchorM, this.#placeAt(event.clientX));
	}

	/** A pointer has gone up, or the browser has taken it to scroll. A click or a tap by itself ends the marking. */
	release(event: Pick<PointerEvent, 'pointerId' | 'type'>): void {
		if (!this.#down.delete(event.pointerId)) return;
		clearTimeout(this.#timer);
		const stretch = this.#cursor.stretch;
		const isEmpty = stretch !== null && stretch.fromM === stretch.toM;
		if (isEmpty || (this.#doing === 'press' && event.type === 'pointerup')) this.#cursor.unmark();
		if (this.#down.size === 0) this.#doing = null;
	}

	/** Ctrl and the wheel, or two fingers on a pad, zoom; in a nearer view a sideways wheel moves along. True where it was taken. */
	wheel({ ctrlKey, shiftKey, deltaX, deltaY, clientX }: Omit<WheelEvent, 'target'>): boolean {
		if (ctrlKey) {
			this.#cursor.zoom(Math.exp(-deltaY / WHEEL_PX), this.#rawPlaceAt(clientX));
			return true;
		}
		const sideways = deltaX !== 0 ? deltaX : shiftKey ? deltaY : 0;
		if (sideways === 0 || !this.#cursor.isZoomed) return false;
		const { fromM, toM } = this.#cursor.view;
		this.#cursor.pan((sideways / this.#box().width) * (toM - fromM));
		return true;
	}

	#pinch(event: Point, before: number): void {
		const other = [...this.#down].find(([id]) => id !== event.pointerId)?.[1];
		if (other === undefined) return;
		const { width } = this.#box();
		const was = Math.max(STILL_PX, Math.abs(before - other));
		const is = Math.max(STILL_PX, Math.abs(event.clientX - other));
		this.#cursor.zoom(is / was, this.#rawPlaceAt((event.clientX + other) / 2));
		const { fromM, toM } = this.#cursor.view;
		this.#cursor.pan((((before - event.clientX) / 2) * (toM - fromM)) / width);
	}

	#shareAt(clientX: number): number {
		const { left, width } = this.#box();
		return width > 0 ? (clientX - left) / width : 0;
	}

	#placeAt(clientX: number): number {
		return this.#cursor.placeAt(this.#shareAt(clientX));
	}

	#rawPlaceAt(clientX: number): number {
		const { fromM, toM } = this.#cursor.view;
		return fromM + this.#shareAt(clientX) * (toM - fromM);
	}
}
