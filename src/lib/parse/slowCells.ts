import type { RowNotes } from './rowNotes.ts';
import type { RowPlan } from './rowPlan.ts';

/** The slow way for one cell: an exotic number, a time, a position, a word. */
export class SlowCells {
	readonly notes: RowNotes;
	readonly #readers: RowPlan['readers'];
	readonly #decoder: TextDecoder;

	constructor(plan: RowPlan, notes: RowNotes) {
		this.notes = notes;
		this.#readers = plan.readers;
		this.#decoder = new TextDecoder(plan.decoder);
	}

	/** The cell that stands in bytes `start` to `end`; NaN where it cannot be read, with a note. */
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
