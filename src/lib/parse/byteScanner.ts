import { BLOCK_ROWS } from './columnStore.ts';
import type { ColumnStore } from './columnStore.ts';
import type { RowNotes } from './rowNotes.ts';
import { MAX_ROW_BYTES } from './rowPlan.ts';
import { tooLong, unclosedQuote } from './rowErrors.ts';
import type { RowPlan } from './rowPlan.ts';

const LF = 10;
const CR = 13;
const SPACE = 32;
const QUOTE = 34;
const PLUS = 43;
const MINUS = 45;
const ZERO = 48;

/** Places in the cursor that a block is filled with. */
const ROWS = 0;
const LINE = 1;
const STOPPED = 2;

/** Up to 15 digits fit a double exactly, and so do powers of ten up to 22: one division rounds as correctly as Number() does. */
const MAX_DIGITS = 15;
const POWERS = Float64Array.from({ length: MAX_DIGITS + 1 }, (_, i) => Number(`1e${i}`));

/**
 * Reads rows of plain numbers straight from bytes into a column store: no strings, no objects, one pass.
 *
 * A cell that is not [spaces][sign]digits[decimal digits][spaces] is handed as text to the column's reader. At the first cell that begins
 * with a quote `push` stops and hands back what is left from that row on; a CSV parser takes over from there.
 * Budget: a plain file of 50 MB and 20 columns in at most a fifth of PapaParse's time on a stream (see scan.bench).
 */
export class ByteScanner {
	/** 1-based line of the next row */
	line = 1;
	readonly #plan: RowPlan;
	readonly #store: ColumnStore;
	readonly #slow: SlowCells;
	readonly #cursor = new Int32Array(3);
	#carry = new Uint8Array(0);
	#rowsInBlock = 0;

	constructor(plan: RowPlan, store: ColumnStore, notes: RowNotes) {
		this.#plan = plan;
		this.#store = store;
		this.#slow = new SlowCells(plan, notes);
	}

	/**
	 * Reads all complete rows; keeps the rest for the next call.
	 *
	 * @returns null, or the bytes from the first quoted row on (then this scanner is done; `line` is that row's line)
	 * @throws {KerbnoteError} `line_too_long` for a row beyond MAX_ROW_BYTES
	 */
	push(chunk: Uint8Array): Uint8Array | null {
		// A subclass (Node's Buffer) would make every byte access of the hot loop look at two shapes.
		let bytes = new Uint8Array(chunk.buffer, chunk.byteOffset, chunk.length);
		if (this.#carry.length > 0) {
			// Only the row that the last chunk cut is copied, up to its end.
			const cut = bytes.length > 1 ? firstLineEnd(bytes) : bytes.length;
			const row = joined(this.#carry, bytes.subarray(0, cut));
			this.#carry = new Uint8Array(0);
			const rest = this.#pushWhole(row);
			if (rest) return joined(rest, bytes.subarray(cut));
			if (cut === bytes.length) return null;
			if (this.#carry.length > 0) {
				bytes = joined(this.#carry, bytes.subarray(cut));
				this.#carry = new Uint8Array(0);
			} else bytes = bytes.subarray(cut);
		}
		return this.#pushWhole(bytes);
	}

	#pushWhole(bytes: Uint8Array): Uint8Array | null {
		const end = endOfRows(bytes);
		const stop = this.#scan(bytes, end);
		if (stop < end) {
			this.#flush();
			this.#carry = new Uint8Array(0);
			return bytes.subarray(stop);
		}
		if (bytes.length - end > MAX_ROW_BYTES)
			throw bytes.includes(QUOTE, end) ? unclosedQuote(this.line) : tooLong(this.line);
		this.#carry = bytes.slice(end);
		return null;
	}

	/** Reads what is left as the last row. Returns as `push`. */
	end(): Uint8Array | null {
		let rest: Uint8Array | null = null;
		if (this.#carry.length > 0) {
			const bytes = joined(this.#carry, Uint8Array.of(LF));
			const stop = this.#scan(bytes, bytes.length);
			if (stop < bytes.length) rest = bytes.subarray(stop);
			this.#carry = new Uint8Array(0);
		}
		this.#flush();
		return rest;
	}

	#flush(): void {
		this.#store.flush(this.#rowsInBlock);
		this.#rowsInBlock = 0;
	}

	/** Reads rows from 0 to `end`, which lies behind a line end. Returns `end`, or the start of the first quoted row. */
	#scan(bytes: Uint8Array, end: number): number {
		let at = 0;
		while (this.line < this.#plan.firstDataLine && at < end) {
			at = nextLine(bytes, at);
			this.line++;
		}
		while (at < end) {
			this.#cursor[ROWS] = this.#rowsInBlock;
			this.#cursor[LINE] = this.line;
			this.#cursor[STOPPED] = 0;
			at = fillBlock(bytes, at, end, this.#plan, this.#store.block, this.#store.blockLines, this.#cursor, this.#slow);
			this.#rowsInBlock = this.#cursor[ROWS];
			this.line = this.#cursor[LINE];
			if (this.#cursor[STOPPED] === 1) break;
			if (this.#rowsInBlock === BLOCK_ROWS) this.#flush();
		}
		return at;
	}
}

/** The slow way for one cell: an exotic number, a time, a position, a word. */
class SlowCells {
	readonly notes: RowNotes;
	readonly #readers: RowPlan['readers'];
	readonly #decoder: TextDecoder;

	constructor(plan: RowPlan, notes: RowNotes) {
		this.notes = notes;
		this.#readers = plan.readers;
		this.#decoder = new TextDecoder(plan.decoder);
	}

	readCell(bytes: Uint8Array, start: number, end: number, slot: number, line: number): number {
		let text = '';
		let beyondAscii = false;
		for (let i = start; i < end; i++) {
			const byte = bytes[i];
			if (byte === 0) this.notes.addNull(line);
			else if (byte >= 0x80) beyondAscii = true;
			else text += String.fromCharCode(byte);
		}
		if (beyondAscii) text = this.#decoder.decode(bytes.subarray(start, end)).replaceAll('\0', '');
		const value = this.#readers[slot](text);
		if (value !== undefined) return value;
		this.notes.addBadCell(slot, line, text);
		return NaN;
	}
}

/**
 * Reads rows into a block until it is full, the bytes end or a quoted cell comes. A function of its own, called a thousand rows at a time,
 * so that the engine optimises it as a whole; `cursor` carries what it changes.
 *
 * @param end behind a line end, which ends every loop
 * @returns where it stopped: a row's start
 */
function fillBlock(
	bytes: Uint8Array,
	from: number,
	end: number,
	plan: RowPlan,
	block: Float64Array,
	blockLines: Int32Array,
	cursor: Int32Array,
	slow: SlowCells
): number {
	const { width, slotOf, plain } = plan;
	const slots = plan.readers.length;
	const delimiter = plan.delimiter.charCodeAt(0);
	const decimal = plan.decimal.charCodeAt(0);
	let rows = cursor[ROWS];
	let line = cursor[LINE];
	let at = from;
	while (at < end && rows < BLOCK_ROWS) {
		const rowStart = at;
		const base = rows * slots;
		let column = 0;
		let byte = bytes[at];
		if (byte === LF || byte === CR) {
			at = nextLine(bytes, at);
			line++;
			continue;
		}
		for (;;) {
			const slot = column < width ? slotOf[column] : -1;
			const cellStart = at;
			let done = false;
			if (slot >= 0 && plain[slot] === 1) {
				while (byte === SPACE) byte = bytes[++at];
				const negative = byte === MINUS;
				if (negative || byte === PLUS) byte = bytes[++at];
				const digitsStart = at;
				let value = 0;
				let digit = byte - ZERO;
				while (digit >= 0 && digit <= 9) {
					value = value * 10 + digit;
					byte = bytes[++at];
					digit = byte - ZERO;
				}
				let digits = at - digitsStart;
				if (byte === decimal) {
					const fraction = at;
					byte = bytes[++at];
					digit = byte - ZERO;
					while (digit >= 0 && digit <= 9) {
						value = value * 10 + digit;
						byte = bytes[++at];
						digit = byte - ZERO;
					}
					const places = at - fraction - 1;
					digits += places;
					if (digits <= MAX_DIGITS) value /= POWERS[places];
				}
				while (byte === SPACE) byte = bytes[++at];
				if (byte === delimiter || byte === LF || byte === CR) {
					if (digits > 0 && digits <= MAX_DIGITS) {
						block[base + slot] = negative ? -value : value;
						done = true;
					} else if (at === cellStart) {
						block[base + slot] = NaN;
						done = true;
					}
				}
			}
			if (!done) {
				at = cellStart;
				byte = bytes[at];
				while (byte === SPACE) byte = bytes[++at];
				if (byte === QUOTE) {
					cursor[ROWS] = rows;
					cursor[LINE] = line;
					cursor[STOPPED] = 1;
					return rowStart;
				}
				while (byte !== delimiter && byte !== LF && byte !== CR) byte = bytes[++at];
				if (slot >= 0) block[base + slot] = slow.readCell(bytes, cellStart, at, slot, line);
				else if (column === width && at > cellStart) slow.notes.addLong(line);
			}
			column++;
			if (byte !== delimiter) break;
			byte = bytes[++at];
		}
		if (column < width) {
			for (let missing = column; missing < width; missing++)
				if (slotOf[missing] >= 0) block[base + slotOf[missing]] = NaN;
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

/** Behind the last complete line; a CR at the very end may be half of a CR LF and waits. */
function endOfRows(bytes: Uint8Array): number {
	for (let i = bytes.length - 1; i >= 0; i--) {
		if (bytes[i] === LF) return i + 1;
		if (bytes[i] === CR && i < bytes.length - 1) return i + 1;
	}
	return 0;
}

/** Behind the first line end that is certain to be whole; the length where there is none. */
function firstLineEnd(bytes: Uint8Array): number {
	for (let i = 0; i < bytes.length; i++) {
		if (bytes[i] === LF) return i + 1;
		if (bytes[i] === CR && i + 1 < bytes.length) return bytes[i + 1] === LF ? i + 2 : i + 1;
	}
	return bytes.length;
}

function nextLine(bytes: Uint8Array, at: number): number {
	while (bytes[at] !== LF && bytes[at] !== CR) at++;
	return at + (bytes[at] === CR && bytes[at + 1] === LF ? 2 : 1);
}

function joined(first: Uint8Array, second: Uint8Array): Uint8Array<ArrayBuffer> {
	const both = new Uint8Array(first.length + second.length);
	both.set(first);
	both.set(second, first.length);
	return both;
}
