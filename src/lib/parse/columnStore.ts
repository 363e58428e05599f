/** Rows per block: few enough that a block of 30 columns stays inside a first-level cache while it is turned into columns. */
export const BLOCK_ROWS = 128;
/** From one slot of a block to the next: a little more than a power of two, or all slots would fall on the same places of the cache. */
export const BLOCK_STRIDE = BLOCK_ROWS + 8;
/** Rows per page: pages are joined once at the end, so nothing is copied while the file grows and the slack is one page a column. */
const PAGE_ROWS = 65_536;
/** Room for a wrongly announced size is bounded: a full day at 100 Hz. */
const MAX_PAGE_ROWS = 8_640_000;

type Column = Float64Array | Float32Array;

/** Least and largest value; both NaN where there is none. */
export interface Range {
	min: number;
	max: number;
}

/**
 * Takes rows of numbers and keeps them as columns, without knowing how many will come.
 *
 * A reader writes into `block` (one array, one element kind: the fastest store there is) and calls `flush` when
 * `BLOCK_ROWS` rows are in it. Pages are typed arrays of fixed size; `finish` joins them column by column and lets each go,
 * so the peak is the data once and one column more.
 */
export class ColumnStore {
	/** slot s, row r at s · BLOCK_STRIDE + r */
	readonly block: Float64Array;
	/** 1-based line of the file for each row of the block */
	readonly blockLines = new Int32Array(BLOCK_ROWS);
	/** rows stored, without those still in the block */
	rows = 0;
	readonly #wide: readonly boolean[];
	readonly #pages: Column[][];
	#linePages: Int32Array[] = [];

	readonly #pageRows: number;
	/** by slot */
	readonly #least: Float64Array;
	readonly #largest: Float64Array;

	/**
	 * @param wide one entry per slot: true keeps 64 bits (time, distances, positions, lap), false 32
	 * @param expectedRows rows to make room for at once; 0: not known
	 */
	constructor(wide: readonly boolean[], expectedRows = 0) {
		this.#wide = wide;
		this.#pageRows = Math.min(MAX_PAGE_ROWS, Math.max(PAGE_ROWS, expectedRows));
		this.#pages = wide.map(() => []);
		this.#least = new Float64Array(wide.length).fill(Infinity);
		this.#largest = new Float64Array(wide.length).fill(-Infinity);
		this.block = new Float64Array(BLOCK_STRIDE * Math.max(1, wide.length));
	}

	/** Moves the first `count` rows of the block into the columns. */
	flush(count: number): void {
		let done = 0;
		while (done < count) {
			const at = this.rows % this.#pageRows;
			if (at === 0) this.#addPage();
			const take = Math.min(count - done, this.#pageRows - at);
			const page = this.#linePages.length - 1;
			for (let slot = 0; slot < this.#wide.length; slot++) {
				const column = this.#pages[slot][page];
				const from = slot * BLOCK_STRIDE + done;
				if (column instanceof Float64Array) copyWide(this.block, from, take, column, at);
				else copyNarrow(this.block, from, take, column, at);
				this.#widen(slot, from, take);
			}
			this.#linePages[page].set(this.blockLines.subarray(done, done + take), at);
			done += take;
			this.rows += take;
		}
	}

	/** Joins the pages, or hands the only one over; the store is empty afterwards. */
	finish(): { columns: Column[]; ranges: Range[]; lines: Int32Array; rows: number } {
		const rows = this.rows;
		const columns = this.#wide.map((wide, slot): Column => {
			const pages = this.#pages[slot];
			this.#pages[slot] = [];
			return pages.length === 1
				? pages[0].subarray(0, rows)
				: joinPages(pages, wide ? new Float64Array(rows) : new Float32Array(rows), this.#pageRows);
		});
		const lines =
			this.#linePages.length === 1
				? this.#linePages[0].subarray(0, rows)
				: joinPages(this.#linePages, new Int32Array(rows), this.#pageRows);
		this.#linePages = [];
		this.rows = 0;
		const ranges = Array.from(this.#least, (min, slot) =>
			min <= this.#largest[slot] ? { min, max: this.#largest[slot] } : { min: NaN, max: NaN }
		);
		return { columns, ranges, lines, rows };
	}

	/** Takes the block's values into the slot's range while they are still in the cache. */
	#widen(slot: number, from: number, count: number): void {
		const { block } = this;
		let least = this.#least[slot];
		let largest = this.#largest[slot];
		for (let i = from; i < from + count; i++) {
			const value = block[i];
			if (value < least) least = value;
			if (value > largest) largest = value;
		}
		this.#least[slot] = least;
		this.#largest[slot] = largest;
	}

	#addPage(): void {
		for (let slot = 0; slot < this.#wide.length; slot++) {
			this.#pages[slot].push(this.#wide[slot] ? new Float64Array(this.#pageRows) : new Float32Array(this.#pageRows));
		}
		this.#linePages.push(new Int32Array(this.#pageRows));
	}
}

// Two copies of one loop: a single one would see two element kinds and run at half the speed.
function copyWide(block: Float64Array, from: number, count: number, out: Float64Array, at: number): void {
	for (let i = 0; i < count; i++) out[at + i] = block[from + i];
}

function copyNarrow(block: Float64Array, from: number, count: number, out: Float32Array, at: number): void {
	for (let i = 0; i < count; i++) out[at + i] = block[from + i];
}

function joinPages<T extends Column | Int32Array>(pages: readonly T[], out: T, pageRows: number): T {
	for (let page = 0, at = 0; at < out.length; page++, at += pageRows) {
		out.set(pages[page].subarray(0, Math.min(pageRows, out.length - at)), at);
	}
	return out;
}
