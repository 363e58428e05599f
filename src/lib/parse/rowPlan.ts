/** What a row reader needs to know about a table: which cells to keep, where, and how to read the odd ones. */
export interface RowPlan {
	delimiter: string;
	decimal: '.' | ',';
	/** number of columns of the header */
	width: number;
	/** by column: slot in the store, −1 to skip the cell */
	slotOf: Int16Array;
	/** by slot: reads the text of a cell; NaN for no value, undefined where it cannot be read */
	readers: readonly ((text: string) => number | undefined)[];
	/** by slot: 1 where a plain number may be read straight from the bytes */
	plain: Uint8Array;
	/** 1-based line of the first data row */
	firstDataLine: number;
	/** label for TextDecoder, for cells beyond ASCII */
	decoder: string;
}

/** A row longer than this is no row of a run (a thousand columns of a hundred characters); it bounds what is ever held back. */
export const MAX_ROW_BYTES = 1 << 17;

/** More columns than any run has channels. */
export const MAX_COLUMNS = 1000;
