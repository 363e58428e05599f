import type { Warning } from '../schemas/analysisDocument.ts';
import type { ColumnMapping } from '../schemas/columnMapping.ts';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { buildRuns } from './buildRuns.ts';
import { ByteScanner } from './byteScanner.ts';
import { isWide } from './columns.ts';
import type { Columns, Ranges } from './columns.ts';
import { ColumnStore } from './columnStore.ts';
import { decoderLabel, detectEncoding } from './encoding.ts';
import type { DetectedEncoding } from './encoding.ts';
import { findTable } from './findTable.ts';
import type { Table } from './findTable.ts';
import { askAboutNames } from './askForColumns.ts';
import { cellReader, isPlain, planColumns } from './planColumns.ts';
import type { ColumnPlan } from './planColumns.ts';
import { QuotedReader } from './quotedReader.ts';
import type { RawRun } from './rawRun.ts';
import { refuseEndlessLine, refuseForeignBytes, refuseForeignText } from './refuseForeign.ts';
import { RowNotes } from './rowNotes.ts';
import type { RowPlan } from './rowPlan.ts';
import { SpaceSqueezer } from './splitSpaced.ts';

export interface ReadOptions {
	/** name of the file, for messages */
	fileName: string;
	/** what a person said about the columns */
	mapping?: ColumnMapping;
	/** size of the whole file, where it is known: spares a copy of what was read */
	sizeBytes?: number;
}

/** Bytes that are looked at before a decision: past any usual preamble, and hundreds of rows. */
const HEAD_BYTES = 1 << 17;
/** A preamble that fills more than this is none. */
const MAX_HEAD_BYTES = 1 << 20;

interface Reading {
	table: Table;
	plans: ColumnPlan[];
	rowPlan: RowPlan;
	store: ColumnStore;
	notes: RowNotes;
	scanner: ByteScanner;
	quoted: QuotedReader | null;
	/** by slot */
	kept: ColumnPlan[];
}

/**
 * Reads a file chunk by chunk into runs. Cost is linear in the file's size; what is held is the recognised columns and one row.
 *
 * Plain rows go through a byte scanner; from the first quoted cell on PapaParse reads. UTF-16 is turned into UTF-8 on the way in.
 *
 * @example const reader = new RunReader({ fileName: 'run.csv' }); reader.push(bytes); const [run] = reader.end();
 */
export class RunReader {
	readonly #options: ReadOptions;
	#head: Uint8Array[] = [];
	#headBytes = 0;
	/** size of the head at which it is looked at next */
	#nextLookBytes = HEAD_BYTES;
	#encoding: DetectedEncoding | null = null;
	#transcoder: TextDecoder | null = null;
	readonly #encoder = new TextEncoder();
	#squeezer: SpaceSqueezer | null = null;
	#reading: Reading | null = null;

	constructor(options: ReadOptions) {
		this.#options = options;
	}

	/** Rows that were read so far. */
	get rows(): number {
		return this.#reading?.store.rows ?? 0;
	}

	/**
	 * Takes the next bytes; the chunk may be used again afterwards.
	 *
	 * @throws {KerbnoteError} where the file is no table of a run; nothing may be pushed after that
	 */
	push(chunk: Uint8Array): void {
		this.#named(() => this.#push(chunk));
	}

	#push(chunk: Uint8Array): void {
		if (this.#reading) {
			this.#feed(this.#reading, this.#toScan(chunk));
			return;
		}
		this.#head.push(new Uint8Array(chunk));
		this.#headBytes += chunk.length;
		if (this.#headBytes < this.#nextLookBytes) return;
		// Each look reads the head again, so that the next one waits until there is twice as much.
		if (!this.#begin(false)) this.#nextLookBytes = 2 * this.#headBytes;
	}

	/**
	 * Ends the file.
	 *
	 * @returns its runs, at least one
	 * @throws {KerbnoteError} where it holds none
	 */
	end(): RawRun[] {
		return this.#named(() => this.#end());
	}

	/** Every error of the file bears its name. */
	#named<T>(work: () => T): T {
		try {
			return work();
		} catch (error) {
			throw error instanceof KerbnoteError ? error.inFile(this.#options.fileName) : error;
		}
	}

	#end(): RawRun[] {
		const reading = this.#reading ?? this.#begin(true);
		if (!reading) throw new RangeError('a whole file must begin a reading or throw');
		if (this.#transcoder) this.#feed(reading, this.#squeezed(this.#encoder.encode(this.#transcoder.decode())));
		const rest = reading.quoted ? null : reading.scanner.end();
		const quoted = rest ? this.#handOver(reading, rest) : reading.quoted;
		quoted?.end();
		return this.#finish(reading);
	}

	/** Decides what the file is; null where more of it is needed for that. */
	#begin(wholeFile: boolean): Reading | null {
		let head = joined(this.#head, this.#headBytes);
		if (head.length === 0)
			throw new KerbnoteError(
				'empty_file',
				'the file is empty',
				'Export the run again and check that the file has a size'
			);
		this.#encoding ??= detectEncoding(head);
		const { encoding, markBytes } = this.#encoding;
		const wide = encoding === 'utf-16le' || encoding === 'utf-16be';
		if (!wide) refuseForeignBytes(head, wholeFile);
		head = head.subarray(markBytes);
		const decoder = new TextDecoder(decoderLabel(encoding));
		const text = decoder.decode(head, { stream: true }).replaceAll('\0', '');
		if (!wholeFile && !/[\r\n]/.test(text)) {
			refuseEndlessLine(text);
		}
		refuseForeignText(text);
		const table = this.#lookForTable(text, wholeFile);
		if (!table) return null;
		this.#reading = this.#plan(table, encoding);
		this.#head = [];
		if (table.delimiter === ' ') this.#squeezer = new SpaceSqueezer();
		if (wide) this.#transcoder = new TextDecoder(encoding);
		this.#feed(this.#reading, this.#toScan(head));
		return this.#reading;
	}

	/** Null where a longer look may still find one: a preamble can fill the first. */
	#lookForTable(text: string, wholeFile: boolean): Table | null {
		try {
			return findTable(text, wholeFile);
		} catch (error) {
			const mayCome = !wholeFile && this.#headBytes < MAX_HEAD_BYTES;
			if (mayCome && error instanceof KerbnoteError && error.code !== 'too_many_columns') return null;
			throw error;
		}
	}

	#plan(table: Table, encoding: DetectedEncoding['encoding']): Reading {
		const plans = planColumns(table, this.#options.mapping);
		askAboutNames(table, plans);
		const kept = plans.filter(({ channel }) => channel !== null);
		const slotOf = Int16Array.from(plans, (plan) => kept.indexOf(plan));
		const wide = encoding === 'utf-16le' || encoding === 'utf-16be';
		const rowPlan: RowPlan = {
			delimiter: table.delimiter === ' ' ? '\t' : table.delimiter,
			decimal: table.decimal,
			width: table.headers.length,
			slotOf,
			readers: kept.map((plan) => cellReader(plan, table.decimal)),
			plain: Uint8Array.from(kept, (plan) => (isPlain(plan) ? 1 : 0)),
			firstDataLine: table.firstDataLine,
			decoder: wide ? 'utf-8' : decoderLabel(encoding)
		};
		const wideSlots = kept.map(({ channel }) => channel !== null && isWide(channel));
		const store = new ColumnStore(wideSlots, this.#expectedRows(table));
		const notes = new RowNotes();
		return { table, plans, rowPlan, store, notes, kept, scanner: new ByteScanner(rowPlan, store, notes), quoted: null };
	}

	/** Rows that the file will have by its size and the length of its first ones; 0 where the size is not known. */
	#expectedRows({ firstRows }: Table): number {
		const { sizeBytes } = this.#options;
		if (!sizeBytes || firstRows.length < 20) return 0;
		const cells = firstRows.reduce((sum, row) => sum + row.reduce((length, cell) => length + cell.length + 1, 0), 0);
		return Math.ceil((sizeBytes / (cells / firstRows.length)) * 1.1);
	}

	#toScan(chunk: Uint8Array): Uint8Array {
		return this.#squeezed(
			this.#transcoder ? this.#encoder.encode(this.#transcoder.decode(chunk, { stream: true })) : chunk
		);
	}

	#squeezed(bytes: Uint8Array): Uint8Array {
		return this.#squeezer ? this.#squeezer.squeeze(bytes) : bytes;
	}

	#feed(reading: Reading, bytes: Uint8Array): void {
		if (reading.quoted) {
			reading.quoted.push(bytes);
			return;
		}
		const rest = reading.scanner.push(bytes);
		if (rest) this.#handOver(reading, rest);
	}

	#handOver(reading: Reading, rest: Uint8Array): QuotedReader {
		const quoted = new QuotedReader(reading.rowPlan, reading.store, reading.notes, reading.scanner.line);
		reading.quoted = quoted;
		quoted.push(rest);
		return quoted;
	}

	#finish({ table, plans, store, notes, kept }: Reading): RawRun[] {
		const { columns, ranges, lines } = store.finish();
		const byChannel: Columns = new Map();
		const rangeByChannel: Ranges = new Map();
		kept.forEach((plan, slot) => {
			if (!plan.channel) return;
			byChannel.set(plan.channel, columns[slot]);
			rangeByChannel.set(plan.channel, ranges[slot]);
		});
		const encoding = this.#encoding?.encoding ?? 'utf-8';
		const warnings: Warning[] = [];
		if (this.#encoding?.assumed) {
			warnings.push({ code: 'encoding_assumed', message: `the text was read as ${encoding}`, row: null });
		}
		return buildRuns({
			columns: byChannel,
			ranges: rangeByChannel,
			lines,
			plans,
			notes,
			noteHeaders: kept.map(({ header }) => header),
			source: {
				encoding,
				delimiter: table.delimiter,
				decimal: table.decimal,
				headerRow: table.headerLine,
				metadata: table.metadata
			},
			warnings
		});
	}
}

function joined(parts: readonly Uint8Array[], length: number): Uint8Array {
	if (parts.length === 1) return parts[0];
	const all = new Uint8Array(length);
	let at = 0;
	for (const part of parts) {
		all.set(part, at);
		at += part.length;
	}
	return all;
}
