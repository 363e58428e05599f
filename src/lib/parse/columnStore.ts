/** Rows per block: 1024 rows × 30 columns × 8 bytes stay inside a second-level cache while a block is turned into columns. */
export const BLOCK_ROWS = 1024;
/** Rows per page: pages are joined once at the end, so nothing is copied while the file grows and the slack is one page a column. */
const PAGE_ROWS = 65_536;

type Column = Float64Array | Float32Array;

/**
 * Takes rows of numbers and keeps them as columns, without knowing how many will come.
 *
 * A reader writes row-major into `block` (one array, one element kind: the fastest store there is) and calls `flush` when
 * `BLOCK_ROWS` rows are in it. Pages are typed arrays of fixed size; `finish` joins them column by column and lets each go,
 * so the peak is the data once and one column more.
 */
export class ColumnStore {
	/** row-major: row r, slot s at r · slots + s */
	readonly block: Float64Array;
	/** 1-based line of the file for each row of the block */
	readonly blockLines = new Int32Array(BLOCK_ROWS);
	/** rows stored, without those still in the block */
	rows = 0;
	readonly #wide: readonly boolean[];
	readonly #pages: Column[][];
	readonly #linePages: Int32Array[] = [];

	/** @param wide one entry per slot: true keeps 64 bits (time, distances, positions, lap), false 32 */
	constructor(wide: readonly boolean[]) {
		this.#wide = wide;
		this.#pages = wide.map(() => []);
		this.block = new Float64Array(BLOCK_ROWS * Math.max(1, wide.length));
	}

	/** Moves the first `count` rows of the block into the columns. */
	flush(count: number): void {
		let done = 0;
		while (done < count) {
			const at = this.rows % PAGE_ROWS;
			if (at === 0) this.#addPage();
			const take = Math.min(count - done, PAGE_ROWS - at);
			const page = this.#linePages.length - 1;
			for (let slot = 0; slot < this.#wide.length; slot++) {
				const column = this.#pages[slot][page];
				if (column instanceof Float64Array) copyWide(this.block, done, take, this.#wide.length, slot, column, at);
				else copyNarrow(this.block, done, take, this.#wide.length, slot, column, at);
			}
			this.#linePages[page].set(this.blockLines.subarray(done, done + take), at);
			done += take;
			this.rows += take;
		}
	}

	/** Joins the pages; the store is empty afterwards. */
	finish(): { columns: Column[]; lines: Int32Array; rows: number } {
		const rows = this.rows;
		const columns = this.#wide.map((wide, slot) => {
			const joined = wide ? new Float64Array(rows) : new Float32Array(rows);
			joinPages(this.#pages[slot], joined, rows);
			this.#pages[slot] = [];
			return joined;
		});
		const lines = new Int32Array(rows);
		joinPages(this.#linePages, lines, rows);
		this.#linePages.length = 0;
		this.rows = 0;
		return { columns, lines, rows };
	}

	#addPage(): void {
		for (let slot = 0; slot < this.#wide.length; slot++) {
			this.#pages[slot].push(this.#wide[slot] ? new Float64Array(PAGE_ROWS) : new Float32Array(PAGE_ROWS));
		}
		this.#linePages.push(new Int32Array(PAGE_ROWS));
	}
}

// Two copies of one loop: a single one would see two element kinds and run at half the speed.
function copyWide(
	block: Float64Array,
	from: number,
	count: number,
	slots: number,
	slot: number,
	out: Float64Array,
	at: number
): void {
	for (let i = 0, source = from * slots + slot; i < count; i++, source += slots) out[at + i] = block[source];
}

function copyNarrow(
	block: Float64Array,
	from: number,
	count: number,
	slots: number,
	slot: number,
	out: Float32Array,
	at: number
): void {
	for (let i = 0, source = from * slots + slot; i < count; i++, source += slots) out[at + i] = block[source];
}

function joinPages<T extends Column | Int32Array>(pages: T[], out: T, rows: number): void {
	for (let page = 0, at = 0; at < rows; page++, at += PAGE_ROWS) {
		out.set(pages[page].subarray(0, Math.min(PAGE_ROWS, rows - at)), at);
	}
}
