import { BLOCK_ROWS, BLOCK_STRIDE } from './columnStore.ts';
import type { SlowCells } from './slowCells.ts';

const LF = 10;
const CR = 13;
const SPACE = 32;
const QUOTE = 34;
const PLUS = 43;
const MINUS = 45;
const POINT = 46;
const ZERO = 48;

/** Places in the cursor that a block is filled with. */
export const ROWS = 0;
export const LINE = 1;
export const STOPPED = 2;

/** In a column's target: nothing is kept. Under it: −2 − slot, for a cell that is never a plain number. */
export const SKIP = -1;

/** A whole number of nine digits fits 32 bits, which is the quickest arithmetic there is. */
const SHORT_DIGITS = 9;
/** Up to 15 digits fit a double exactly, and so do powers of ten up to 22: one division rounds as correctly as Number() does. */
const MAX_DIGITS = 15;
const POWERS = Float64Array.from({ length: MAX_DIGITS + 1 }, (_, i) => Number(`1e${i}`));

/**
 * Reads rows into a block until it is full, the bytes end or a quoted cell comes. A function of its own, called a block at a time,
 * so that the engine optimises it as a whole; `cursor` carries what it changes.
 *
 * @param end behind a line end, which ends every loop
 * @param targets by column: its slot, SKIP, or −2 − slot
 * @param decimal code of the decimal sign
 * @returns where it stopped: a row's start
 */
export function fillBlock(
	bytes: Uint8Array,
	from: number,
	end: number,
	targets: Int16Array,
	delimiter: number,
	decimal: number,
	block: Float64Array,
	blockLines: Int32Array,
	cursor: Int32Array,
	slow: SlowCells
): number {
	const width = targets.length;
	let rows = cursor[ROWS];
	let line = cursor[LINE];
	let at = from;
	while (at < end && rows < BLOCK_ROWS) {
		const rowStart = at;
		let column = 0;
		let byte = bytes[at];
		if (byte === LF || byte === CR) {
			at = nextLine(bytes, at);
			line++;
			continue;
		}
		for (;;) {
			const target = column < width ? targets[column] : SKIP;
			const cellStart = at;
			let done = false;
			if (target >= 0) {
				while (byte === SPACE) byte = bytes[++at];
				const negative = byte === MINUS;
				if (negative || byte === PLUS) byte = bytes[++at];
				const digitsStart = at;
				let mantissa = 0;
				let digit = byte - ZERO;
				while (digit >>> 0 < 10) {
					mantissa = (Math.imul(mantissa, 10) + digit) | 0;
					byte = bytes[++at];
					digit = byte - ZERO;
				}
				let digits = at - digitsStart;
				let places = 0;
				if (byte === decimal) {
					const fraction = ++at;
					byte = bytes[at];
					digit = byte - ZERO;
					while (digit >>> 0 < 10) {
						mantissa = (Math.imul(mantissa, 10) + digit) | 0;
						byte = bytes[++at];
						digit = byte - ZERO;
					}
					places = at - fraction;
					digits += places;
				}
				const digitsEnd = at;
				while (byte === SPACE) byte = bytes[++at];
				if (byte === delimiter || byte === LF || byte === CR) {
					if (digits > 0 && digits <= SHORT_DIGITS) {
						const value = mantissa / POWERS[places];
						block[target * BLOCK_STRIDE + rows] = negative ? -value : value;
						done = true;
					} else if (digits > SHORT_DIGITS && digits <= MAX_DIGITS) {
						const value = longMantissa(bytes, digitsStart, digitsEnd, decimal) / POWERS[places];
						block[target * BLOCK_STRIDE + rows] = negative ? -value : value;
						done = true;
					} else if (at === cellStart) {
						block[target * BLOCK_STRIDE + rows] = NaN;
						done = true;
					}
				}
				if (!done) {
					at = cellStart;
					byte = bytes[at];
				}
			}
			if (!done) {
				while (byte === SPACE) byte = bytes[++at];
				if (byte === QUOTE) {
					cursor[ROWS] = rows;
					cursor[LINE] = line;
					cursor[STOPPED] = 1;
					return rowStart;
				}
				// Digits and the point are most of what is passed over: one comparison for them.
				while ((byte - POINT) >>> 0 < 12 || (byte !== delimiter && byte !== LF && byte !== CR)) byte = bytes[++at];
				if (target !== SKIP) {
					const slot = target >= 0 ? target : -2 - target;
					block[slot * BLOCK_STRIDE + rows] = slow.readCell(bytes, cellStart, at, slot, line);
				} else if (column === width && at > cellStart) slow.notes.addLong(line);
			}
			column++;
			if (byte !== delimiter) break;
			byte = bytes[++at];
		}
		if (column < width) {
			for (let missing = column; missing < width; missing++) {
				const target = targets[missing];
				if (target !== SKIP) block[(target >= 0 ? target : -2 - target) * BLOCK_STRIDE + rows] = NaN;
			}
			slow.notes.addShort(line);
		}
		blockLines[rows] = line;
		at += byte === CR && bytes[at + 1] === LF ? 2 : 1;
		line++;
		rows++;
	}
	cursor[ROWS] = rows;
	cursor[LINE] = line;
	return at;
}

/** The digits of a cell as one whole number below 10¹⁵, its decimal sign left out. */
function longMantissa(bytes: Uint8Array, from: number, to: number, decimal: number): number {
	let value = 0;
	for (let i = from; i < to; i++) if (bytes[i] !== decimal) value = value * 10 + (bytes[i] - ZERO);
	return value;
}

/** Behind the line that `at` stands in. */
export function nextLine(bytes: Uint8Array, at: number): number {
	while (bytes[at] !== LF && bytes[at] !== CR) at++;
	return at + (bytes[at] === CR && bytes[at + 1] === LF ? 2 : 1);
}
