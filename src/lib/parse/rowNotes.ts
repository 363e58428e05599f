import type { Warning } from '../schemas/analysisDocument.ts';

interface Note {
	count: number;
	/** line of the first one */
	line: number;
}

export interface CellNote extends Note {
	text: string;
}

/** Counts what was odd in the rows while they are read: bounded, however long the file. */
export class RowNotes {
	readonly short: Note = { count: 0, line: 0 };
	readonly long: Note = { count: 0, line: 0 };
	/** by slot */
	readonly badCells: (CellNote | undefined)[] = [];
	nulls: Note = { count: 0, line: 0 };

	addShort(line: number): void {
		add(this.short, line);
	}

	addLong(line: number): void {
		add(this.long, line);
	}

	addNull(line: number): void {
		add(this.nulls, line);
	}

	addBadCell(slot: number, line: number, text: string): void {
		const note = this.badCells[slot];
		if (note) note.count++;
		else this.badCells[slot] = { count: 1, line, text: text.slice(0, 40) };
	}

	/**
	 * @param headers names of the columns by slot
	 * @param endLine line where a footer begins, whose oddities are not the table's; Infinity where there is none
	 * @param timeHeader the time column, whose unreadable cells are told with the rows that they cost
	 */
	toWarnings(headers: readonly string[], endLine: number, timeHeader: string): Warning[] {
		const warnings: Warning[] = [];
		if (this.short.count > 0 && this.short.line < endLine) {
			warnings.push({
				code: 'short_row',
				message: `${rows(this.short.count)} with cells missing at the end, read as no value`,
				row: this.short.line
			});
		}
		if (this.long.count > 0 && this.long.line < endLine) {
			warnings.push({
				code: 'long_row',
				message: `${rows(this.long.count)} with more cells than the header, the surplus left out`,
				row: this.long.line
			});
		}
		if (this.nulls.count > 0) {
			warnings.push({
				code: 'null_bytes_removed',
				message: `null bytes in ${rows(this.nulls.count)} were left out`,
				row: this.nulls.line
			});
		}
		this.badCells.forEach((note, slot) => {
			if (!note || note.line >= endLine || headers[slot] === timeHeader) return;
			const cells = note.count === 1 ? '1 cell' : `${note.count} cells`;
			warnings.push({
				code: 'bad_cell',
				message: `${cells} of column "${headers[slot]}" cannot be read as a number, first "${note.text}"`,
				row: note.line
			});
		});
		return warnings;
	}
}

function add(note: Note, line: number): void {
	if (note.count === 0) note.line = line;
	note.count++;
}

function rows(count: number): string {
	return count === 1 ? '1 row' : `${count} rows`;
}
