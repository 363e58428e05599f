import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { MAX_COLUMNS } from './rowPlan.ts';

interface Signature {
	bytes: readonly number[];
	name: string;
	packed: boolean;
}

const ascii = (text: string) => [...text].map((letter) => letter.charCodeAt(0));

/** First bytes of what people send by mistake. Source: the formats' own specifications (RFC 1952, RFC 8878, PNG, PDF 32000 …). */
const SIGNATURES: readonly Signature[] = [
	{ bytes: [0x50, 0x4b, 0x03, 0x04], name: 'a ZIP archive or a spreadsheet workbook', packed: true },
	{ bytes: [0x50, 0x4b, 0x05, 0x06], name: 'an empty ZIP archive', packed: true },
	{ bytes: [0x1f, 0x8b], name: 'a gzip file', packed: true },
	{ bytes: ascii('BZh'), name: 'a bzip2 file', packed: true },
	{ bytes: [0xfd, 0x37, 0x7a, 0x58, 0x5a], name: 'an xz file', packed: true },
	{ bytes: [0x37, 0x7a, 0xbc, 0xaf], name: 'a 7z archive', packed: true },
	{ bytes: ascii('Rar!'), name: 'a RAR archive', packed: true },
	{ bytes: [0x28, 0xb5, 0x2f, 0xfd], name: 'a Zstandard file', packed: true },
	{ bytes: [0x04, 0x22, 0x4d, 0x18], name: 'an LZ4 file', packed: true },
	{ bytes: [0xd0, 0xcf, 0x11, 0xe0], name: 'an old binary office document', packed: false },
	{ bytes: ascii('%PDF'), name: 'a PDF', packed: false },
	{ bytes: [0x89, 0x50, 0x4e, 0x47], name: 'a PNG picture', packed: false },
	{ bytes: [0xff, 0xd8, 0xff], name: 'a JPEG picture', packed: false },
	{ bytes: ascii('GIF8'), name: 'a GIF picture', packed: false },
	{ bytes: ascii('SQLite format 3'), name: 'a database file', packed: false },
	{ bytes: [0x7f, 0x45, 0x4c, 0x46], name: 'a program', packed: false }
];

/** Share of control bytes above which a file is no text: one in a hundred, as stray nulls at row ends stay far below. */
const MAX_CONTROL_SHARE = 0.01;

/**
 * Refuses what is no table of text before anything is parsed.
 *
 * @param head first bytes of the file (not UTF-16, whose nulls are text)
 * @throws {KerbnoteError} `compressed_file`, `not_text`, `empty_file`
 */
export function refuseForeignBytes(head: Uint8Array, wholeFile: boolean): void {
	for (const { bytes, name, packed } of SIGNATURES) {
		if (!bytes.every((byte, i) => head[i] === byte)) continue;
		if (packed) {
			throw new KerbnoteError(
				'compressed_file',
				`the file is ${name}, not a CSV`,
				'Unpack it and upload the CSV inside'
			);
		}
		throw new KerbnoteError('not_text', `the file is ${name}, not a CSV`, 'Export the run as CSV and upload that file');
	}
	let control = 0;
	let nulls = 0;
	let visible = 0;
	for (let i = 0; i < head.length; i++) {
		const byte = head[i];
		if (byte === 0) nulls++;
		else if (byte < 0x20 && (byte < 0x09 || byte > 0x0d) && byte !== 0x1a && byte !== 0x1b) control++;
		else if (byte > 0x20) visible++;
	}
	if (visible === 0 && nulls === 0 && wholeFile) {
		throw new KerbnoteError(
			'empty_file',
			'the file holds no text',
			'Export the run again and check that the file has a size'
		);
	}
	if (
		control + nulls > 4 &&
		(control > MAX_CONTROL_SHARE * head.length || nulls > 4 * MAX_CONTROL_SHARE * head.length)
	) {
		throw new KerbnoteError(
			'not_text',
			'the file holds binary data, not text',
			'Export the run as CSV and upload that file'
		);
	}
}

/**
 * Refuses text that is another format: JSON, XML, HTML.
 *
 * @throws {KerbnoteError} `not_csv`
 */
export function refuseForeignText(head: string): void {
	const text = head.trimStart();
	const markup = /^<(?:\?xml|!doctype|html|svg|gpx|kml|tcx|[a-z]+[\s>])/i.test(text);
	const json =
		/^[{[]\s*(?:["[{\]}]|-?\d)/.test(text) &&
		/^[{[][\s\S]*["\d\]}]\s*[,:\]}]/.test(text) &&
		!/^\[[^\]\n]*\][,;\t|]/.test(text);
	if (!markup && !json) return;
	const name = markup ? 'markup (XML or HTML)' : 'JSON';
	throw new KerbnoteError(
		'not_csv',
		`the file holds ${name}, not a table of comma-separated values`,
		'Export the run as CSV and upload that file',
		{
			row: 1
		}
	);
}

/**
 * Refuses a file whose first line does not end within what is looked at.
 *
 * @throws {KerbnoteError} `too_many_columns`, `unclosed_quote`, `not_csv`
 */
export function refuseEndlessLine(head: string): never {
	for (const delimiter of [',', ';', '\t', '|']) {
		if (head.split(delimiter, MAX_COLUMNS + 2).length > MAX_COLUMNS + 1) {
			throw new KerbnoteError(
				'too_many_columns',
				`row 1 has more than ${MAX_COLUMNS} columns`,
				'Export only the channels of the run, one row per sample',
				{ row: 1 }
			);
		}
	}
	if (head.trimStart().startsWith('"')) {
		throw new KerbnoteError(
			'unclosed_quote',
			'row 1 opens a quote that is never closed',
			'Add the missing double quote in that row, or remove the one that opens it',
			{ row: 1 }
		);
	}
	throw new KerbnoteError(
		'not_csv',
		`row 1 has no end within ${head.length} characters, so this is no table`,
		'Export the run as CSV with one row per sample',
		{ row: 1 }
	);
}
