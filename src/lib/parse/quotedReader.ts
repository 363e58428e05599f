import Papa from 'papaparse';
import { BLOCK_ROWS, BLOCK_STRIDE } from './columnStore.ts';
import type { ColumnStore } from './columnStore.ts';
import { tooLong, unclosedQuote } from './rowErrors.ts';
import type { RowNotes } from './rowNotes.ts';
import { MAX_ROW_BYTES } from './rowPlan.ts';
import type { RowPlan } from './rowPlan.ts';

interface ParsedRows {
	data: string[][];
	errors: { code: string; row?: number }[];
	meta: { cursor: number };
}

/** Text parsed at a time: large enough for the parser's pace, small enough to keep its strings short-lived. */
const SLICE_BYTES = 1 << 18;

/**
 * Reads rows with quoted cells into a column store through PapaParse, chunk by chunk.
 *
 * Line ends are made uniform before parsing, so that mixed ones read alike; an unfinished row is held back, at most MAX_ROW_BYTES of it.
 */
export class QuotedReader {
	/** 1-based line of the next row */
	line: number;
	readonly #plan: RowPlan;
	readonly #store: ColumnStore;
	readonly #notes: RowNotes;
	readonly #decoder: TextDecoder;
	readonly #kept: readonly { column: number; slot: number }[];
	#text = '';
	#heldBackCr = false;
	#rowsInBlock = 0;

	constructor(plan: RowPlan, store: ColumnStore, notes: RowNotes, line: number) {
		this.#plan = plan;
		this.#store = store;
		this.#notes = notes;
		this.#decoder = new TextDecoder(plan.decoder);
		this.#kept = [...plan.slotOf].flatMap((slot, column) => (slot >= 0 ? [{ column, slot }] : []));
		this.line = line;
	}

	/** @throws {KerbnoteError} `unclosed_quote`, `line_too_long` */
	push(chunk: Uint8Array): void {
		for (let at = 0; at < chunk.length; at += SLICE_BYTES) {
			this.#append(this.#decoder.decode(chunk.subarray(at, at + SLICE_BYTES), { stream: true }));
			this.#parse(false);
			if (this.#text.length > MAX_ROW_BYTES)
				throw this.#text.includes('"') ? unclosedQuote(this.line) : tooLong(this.line);
		}
	}

	/** Reads what is left. @throws {KerbnoteError} `unclosed_quote` */
	end(): void {
		this.#append(this.#decoder.decode());
		if (this.#heldBackCr) this.#text += '\n';
		this.#heldBackCr = false;
		this.#parse(true);
		this.#store.flush(this.#rowsInBlock);
		this.#rowsInBlock = 0;
	}

	#append(text: string): void {
		let piece = this.#heldBackCr ? `\r${text}` : text;
		this.#heldBackCr = piece.endsWith('\r');
		if (this.#heldBackCr) piece = piece.slice(0, -1);
		if (piece.includes('\r')) piece = piece.replace(/\r\n?/g, '\n');
		this.#text += piece;
	}

	#parse(last: boolean): void {
		if (this.#text === '') return;
		const parser = new Papa.Parser({ delimiter: this.#plan.delimiter, newline: '\n', quoteChar: '"', header: false });
		const result: ParsedRows = parser.parse(this.#text, 0, !last);
		const used = last ? this.#text : this.#text.slice(0, result.meta.cursor);
		const uniform = countLines(used) === result.data.length;
		const unclosed = result.errors.find(({ code }) => code === 'MissingQuotes');
		result.data.forEach((cells, i) => {
			const lines = uniform ? 1 : 1 + cells.reduce((sum, cell) => sum + countLines(cell), 0);
			if (lines > 1 && cells.some((cell) => this.#swallowsRows(cell))) throw unclosedQuote(this.line);
			if (last && unclosed?.row === i) throw unclosedQuote(this.line);
			if (this.line >= this.#plan.firstDataLine && !(cells.length === 1 && cells[0].trim() === '')) this.#addRow(cells);
			this.line += lines;
		});
		this.#text = last ? '' : this.#text.slice(result.meta.cursor);
	}

	#addRow(cells: readonly string[]): void {
		const { readers, width } = this.#plan;
		const { block, blockLines } = this.#store;
		for (const { column, slot } of this.#kept) {
			const text = cells[column];
			let value: number | undefined = NaN;
			if (text !== undefined && text !== '') {
				value = readers[slot](text);
				if (value === undefined && text.includes('\0')) {
					this.#notes.addNull(this.line);
					value = readers[slot](text.replaceAll('\0', ''));
				}
				if (value === undefined) this.#notes.addBadCell(slot, this.line, text);
			}
			block[slot * BLOCK_STRIDE + this.#rowsInBlock] = value ?? NaN;
		}
		if (cells.length < width) this.#notes.addShort(this.line);
		else if (cells.length > width && cells.slice(width).some((cell) => cell !== '')) this.#notes.addLong(this.line);
		blockLines[this.#rowsInBlock] = this.line;
		if (++this.#rowsInBlock === BLOCK_ROWS) {
			this.#store.flush(this.#rowsInBlock);
			this.#rowsInBlock = 0;
		}
	}

	/** A cell with whole rows of the table inside: its quote was never meant to reach that far. */
	#swallowsRows(cell: string): boolean {
		return cell
			.split('\n')
			.some((line, i) => i > 0 && line.split(this.#plan.delimiter).length >= Math.max(2, this.#plan.width - 1));
	}
}

function countLines(text: string): number {
	let count = 0;
	for (let at = text.indexOf('\n'); at >= 0; at = text.indexOf('\n', at + 1)) count++;
	return count;
}
