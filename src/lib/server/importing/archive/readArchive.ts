import type { Readable } from 'node:stream';
import { promisify } from 'node:util';
import yauzl, { type Entry, type ZipFile } from 'yauzl';
import { KerbnoteError } from '../../../schemas/kerbnoteError.ts';
import { checkInflated, firstBytes, isGzip } from '../plainBytes.ts';

/** More runs than a season has. */
const MOST_FILES = 500;
/** Folders and what is no table are counted too: a directory of millions is a bomb of its own. */
const MOST_ENTRIES = 5_000;
/** All files of an archive together, unpacked. */
const LARGEST_TOTAL_BYTES = 4 * 1024 ** 3;
/** What a table of a run is called. */
const TABLE_NAME = /\.(csv|txt|tsv|tab|asc|dat|log|gz)$/i;
const ARCHIVE_NAME = /\.(zip|7z|rar|tar|tgz|tbz2?|txz|bz2|xz|zst)$|\.tar\.gz$/i;
const ENCRYPTED = 0x1;

/** One table of an archive. */
export interface ArchiveTable {
	/** 0-based among the tables */
	index: number;
	/** last part of its path */
	name: string;
	/** its bytes, counted against the limits while they are unpacked */
	open(): AsyncIterable<Uint8Array>;
}

const openZip = promisify<string, yauzl.Options, ZipFile>(yauzl.open);

/** Does the file begin like a zip (APPNOTE 4.3.7), also one without a file in it. */
export async function isArchive(path: string): Promise<boolean> {
	const head = await firstBytes(path, 4);
	if (head.length < 4 || head[0] !== 0x50 || head[1] !== 0x4b) return false;
	return (head[2] === 3 && head[3] === 4) || (head[2] === 5 && head[3] === 6);
}

/**
 * Reads a zip: each table in it, one after another, with the names of what is no table.
 *
 * @param each called for every table, in the archive's order
 * @returns names of all files in it
 * @throws {KerbnoteError} `compressed_file` where it is encrypted, damaged, over a limit, holds an archive, or names a place outside
 *   itself; `no_data_rows` where no table is in it; `not_csv` for a workbook
 */
export async function readArchive(
	path: string,
	each: (table: ArchiveTable) => Promise<void>
): Promise<{ name: string; isTable: boolean }[]> {
	const zip = await opened(path);
	try {
		const entries = await listEntries(zip);
		const tables = entries.filter(({ fileName }) => TABLE_NAME.test(fileName));
		if (tables.length === 0) throw withoutTable(entries);
		let totalBytes = 0;
		for (const [index, entry] of tables.entries()) {
			await each({
				index,
				name: baseName(entry.fileName),
				open: () =>
					inflate(zip, entry, (bytes) => {
						totalBytes += bytes;
						if (totalBytes > LARGEST_TOTAL_BYTES)
							throw refused('unpacks to more than 4 GB', 'Make several archives of it');
					})
			});
		}
		return entries.map(({ fileName }) => ({ name: baseName(fileName), isTable: TABLE_NAME.test(fileName) }));
	} finally {
		zip.close();
	}
}

async function opened(path: string): Promise<ZipFile> {
	try {
		// Names are checked here, with a reason that a person can read.
		return await openZip(path, { lazyEntries: true, autoClose: false, validateEntrySizes: true, decodeStrings: true });
	} catch (cause) {
		throw damaged(cause);
	}
}

async function listEntries(zip: ZipFile): Promise<Entry[]> {
	if (zip.entryCount > MOST_ENTRIES)
		throw refused(`holds more than ${MOST_ENTRIES} files`, 'Make several archives of it');
	const all = await new Promise<Entry[]>((resolve, reject) => {
		const found: Entry[] = [];
		zip.on('entry', (entry: Entry) => {
			found.push(entry);
			if (found.length > MOST_ENTRIES)
				reject(refused(`holds more than ${MOST_ENTRIES} files`, 'Make several archives of it'));
			else zip.readEntry();
		});
		zip.once('end', () => resolve(found));
		zip.once('error', (cause: Error) => reject(isBadName(cause) ? outside() : damaged(cause)));
		zip.readEntry();
	});
	const files = all.filter(({ fileName }) => !fileName.endsWith('/') && !isByTheWay(fileName));
	for (const entry of files) check(entry);
	if (files.filter(({ fileName }) => TABLE_NAME.test(fileName)).length > MOST_FILES) {
		throw refused(`holds more than ${MOST_FILES} tables`, 'Make several archives of it');
	}
	return files;
}

function check(entry: Entry): void {
	const { fileName } = entry;
	if (/^[/\\]|^[a-z]:|(^|[/\\])\.\.([/\\]|$)|\0/i.test(fileName)) throw outside();
	if ((entry.generalPurposeBitFlag & ENCRYPTED) !== 0) {
		throw refused('is locked with a password', 'Make the archive again without a password');
	}
	if (ARCHIVE_NAME.test(fileName)) {
		throw refused('holds another archive', 'Put the tables themselves into one archive', baseName(fileName));
	}
}

/** What a system adds that nobody put in. */
function isByTheWay(fileName: string): boolean {
	const name = baseName(fileName);
	return fileName.startsWith('__MACOSX/') || name.startsWith('._') || name === '.DS_Store' || name === 'Thumbs.db';
}

async function* inflate(zip: ZipFile, entry: Entry, count: (bytes: number) => void): AsyncIterable<Uint8Array> {
	let stream: Readable;
	try {
		stream = await promisify<Entry, Readable>(zip.openReadStream.bind(zip))(entry);
	} catch (cause) {
		throw damaged(cause);
	}
	let inflated = 0;
	try {
		for await (const chunk of stream) {
			const bytes: Uint8Array = chunk;
			if (inflated === 0 && looksLikeArchive(bytes)) {
				throw refused('holds another archive', 'Put the tables themselves into one archive', baseName(entry.fileName));
			}
			inflated += bytes.length;
			count(bytes.length);
			checkInflated(inflated, Math.max(1, entry.compressedSize));
			yield bytes;
		}
	} catch (cause) {
		throw cause instanceof KerbnoteError ? cause : damaged(cause);
	} finally {
		stream.destroy();
	}
}

/** A table may be gzip in a zip; an archive in it, whatever its name, is not opened. */
function looksLikeArchive(bytes: Uint8Array): boolean {
	return (
		!isGzip(bytes) && bytes.length >= 4 && bytes[0] === 0x50 && bytes[1] === 0x4b && bytes[2] === 3 && bytes[3] === 4
	);
}

function baseName(fileName: string): string {
	return fileName.split(/[/\\]/).pop() ?? fileName;
}

function isBadName(cause: Error): boolean {
	return /invalid relative path|absolute path|invalid characters in fileName/i.test(cause.message);
}

function withoutTable(entries: readonly Entry[]): KerbnoteError {
	if (entries.some(({ fileName }) => fileName === '[Content_Types].xml')) {
		return new KerbnoteError('not_csv', 'the file is a workbook, not a table of text', 'Save its sheet as CSV');
	}
	return new KerbnoteError(
		'no_data_rows',
		'the archive holds no table: no file in it ends in .csv, .txt or .tsv',
		'Put the exported tables into it'
	);
}

function refused(what: string, remedy: string, file?: string): KerbnoteError {
	return new KerbnoteError('compressed_file', `the archive ${what}`, remedy, file === undefined ? {} : { file });
}

function outside(): KerbnoteError {
	return refused('names a place outside itself', 'Make the archive again from the files themselves');
}

function damaged(cause: unknown): KerbnoteError {
	const reason = cause instanceof Error ? cause.message : String(cause);
	if (/encrypt/i.test(reason)) return refused('is locked with a password', 'Make the archive again without a password');
	return new KerbnoteError(
		'compressed_file',
		'the archive cannot be unpacked',
		'Make the archive again, or hand the tables over one by one',
		{},
		{ cause }
	);
}
