import type { CurveFactory } from 'd3-shape';

/**
 * Collects drawing commands into an SVG path of whole numbers, each relative to the last point: a third of the bytes of the usual
 * absolute decimals, and it compresses well. `curve` lets d3-shape's generators draw into it.
 *
 * Coordinates are rounded on the absolute grid, so that rounding never adds up. Whatever is not finite throws, because a path
 * with NaN in it silently draws nothing.
 *
 * @throws {RangeError} for a coordinate that is not finite
 * @example const path = new CompactPath(); path.moveTo(0, 10); path.lineTo(5, 7); String(path) // => "M0 10l5-3"
 */
export class CompactPath {
	#commands = '';
	#x = 0;
	#y = 0;
	#startX = 0;
	#startY = 0;
	#inLine = false;

	moveTo(x: number, y: number): void {
		const [px, py] = whole(x, y);
		this.#commands += `M${px}${separated(py)}`;
		this.#x = this.#startX = px;
		this.#y = this.#startY = py;
		this.#inLine = false;
	}

	lineTo(x: number, y: number): void {
		const [px, py] = whole(x, y);
		const dx = px - this.#x;
		const dy = py - this.#y;
		if (dx === 0 && dy === 0) return;
		this.#commands += `${this.#inLine ? separated(dx) : `l${dx}`}${separated(dy)}`;
		this.#x = px;
		this.#y = py;
		this.#inLine = true;
	}

	/** A dot: a line of no length, which round caps show. */
	dot(): void {
		this.#commands += 'h0';
		this.#inLine = false;
	}

	closePath(): void {
		this.#commands += 'z';
		this.#x = this.#startX;
		this.#y = this.#startY;
		this.#inLine = false;
	}

	toString(): string {
		return this.#commands;
	}

	/** A straight curve for `line().curve(…)`: what the generator walks goes into this path, and a lone point becomes a dot. */
	readonly curve: CurveFactory = () => {
		let points = 0;
		return {
			areaStart: () => {},
			areaEnd: () => {},
			lineStart: () => {
				points = 0;
			},
			lineEnd: () => {
				if (points === 1) this.dot();
			},
			point: (x, y) => {
				if (points++ === 0) this.moveTo(x, y);
				else this.lineTo(x, y);
			}
		};
	};
}

function whole(x: number, y: number): [number, number] {
	if (!Number.isFinite(x) || !Number.isFinite(y)) throw new RangeError(`a path needs finite points, got ${x}, ${y}`);
	// "+ 0" turns −0 into 0
	return [Math.round(x) + 0, Math.round(y) + 0];
}

/** A minus sign separates two numbers by itself. */
function separated(value: number): string {
	return value < 0 ? `${value}` : ` ${value}`;
}
