import { BLOCK_ROWS } from './columnStore.ts';
import type { ColumnStore } from './columnStore.ts';
import { fillBlock, LINE, nextLine, ROWS, SKIP, STOPPED } from './fillBlock.ts';
import type { RowNotes } from './rowNotes.ts';
import { MAX_ROW_BYTES } from './rowPlan.ts';
import { tooLong, unclosedQuote } from './rowErrors.ts';
import type { RowPlan } from './rowPlan.ts';
import { SlowCells } from './slowCells.ts';

const LF = 10;
const CR = 13;
const QUOTE = 34;

/**
 * Reads rows of plain numbers straight from bytes into a column store: no strings, no objects, one pass.
 *
 * A cell that is not [spaces][sign]digits[decimal digits][spaces] is handed as text to the column's reader. At the first cell that begins
 * with a quote `push` stops and hands back what is left from that row on; a CSV parser takes over from there.
 * Budget: a plain file of 50 MB and 20 columns in at most a fifth of PapaParse's time on a stream (see the bench command).
 */
export class ByteScanner {
	/** 1-based line of the next row */
	line = 1;
	readonly #plan: RowPlan;
	readonly #store: ColumnStore;
	readonly #slow: SlowCells;
	readonly #cursor = new Int32Array(3);
	readonly #targets: Int16Array;
	readonly #delimiter: number;
	readonly #decimal: number;
	#carry = new Uint8Array(0);
	#rowsInBlock = 0;

	constructor(plan: RowPlan, store: ColumnStore, notes: RowNotes) {
		this.#plan = plan;
		this.#store = store;
		this.#slow = new SlowCells(plan, notes);
		this.#targets = plan.slotOf.map((slot) => (slot < 0 ? SKIP : plan.plain[slot] === 1 ? slot : -2 - slot));
		this.#delimiter = plan.delimiter.charCodeAt(0);
		this.#decimal = plan.decimal.charCodeAt(0);
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
			at = fillBlock(
				bytes,
				at,
				end,
				this.#targets,
				this.#delimiter,
				this.#decimal,
				this.#store.block,
				this.#store.blockLines,
				this.#cursor,
				this.#slow
			);
			this.#rowsInBlock = this.#cursor[ROWS];
			this.line = this.#cursor[LINE];
			if (this.#cursor[STOPPED] === 1) break;
			if (this.#rowsInBlock === BLOCK_ROWS) this.#flush();
		}
		return at;
	}
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

function joined(first: Uint8Array, second: Uint8Array): Uint8Array<ArrayBuffer> {
	const both = new Uint8Array(first.length + second.length);
	both.set(first);
	both.set(second, first.length);
	return both;
}
