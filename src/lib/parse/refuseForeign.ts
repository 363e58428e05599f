import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { tooLong, unclosedQuote } from './rowErrors.ts';

interface Signature {
	bytes: readonly number[];
	name: string;
	packed: boolean;
	/** where the bytes stand, when not at the start */
	offset?: number;
}

const ascii = (text: string) => [...text].map((letter) => letter.charCodeAt(0));

/** First bytes of what people send by mistake. Source: the formats' own specifications (RFC 1952, RFC 8878, PNG, PDF 32000 …). */
const SIGNATURES: readonly Signature[] = [
	{ bytes: [0x50, 0x4b, 0x03, 0x04], name: 'a ZIP archive or a spreadsheet workbook', packed: true },
	{ bytes: [0x50, 0x4b, 0x05, 0x06], name: 'an empty ZIP archive', packed: true },
	{ bytes: [0x50, 0x4b, 0x07, 0x08], name: 'a part of a ZIP archive', packed: true },
	{ bytes: [0x1f, 0x8b], name: 'a gzip file', packed: true },
	{ bytes: [0x1f, 0x9d], name: 'a file packed with compress', packed: true },
	{ bytes: ascii('BZh'), name: 'a bzip2 file', packed: true },
	{ bytes: [0xfd, 0x37, 0x7a, 0x58, 0x5a], name: 'an xz file', packed: true },
	{ bytes: [0x37, 0x7a, 0xbc, 0xaf], name: 'a 7z archive', packed: true },
	{ bytes: ascii('Rar!'), name: 'a RAR archive', packed: true },
	{ bytes: [0x28, 0xb5, 0x2f, 0xfd], name: 'a Zstandard file', packed: true },
	{ bytes: [0x04, 0x22, 0x4d, 0x18], name: 'an LZ4 file', packed: true },
	{ bytes: ascii('MSCF'), name: 'a cabinet archive', packed: true },
	{ bytes: ascii('ustar'), name: 'a tar archive', packed: true, offset: 257 },
	{ bytes: [0xd0, 0xcf, 0x11, 0xe0], name: 'an old binary office document', packed: false },
	{ bytes: ascii('%PDF'), name: 'a PDF', packed: false },
	{ bytes: ascii('{\\rtf'), name: 'a rich-text document', packed: false },
	{ bytes: [0x89, 0x50, 0x4e, 0x47], name: 'a PNG picture', packed: false },
	{ bytes: [0xff, 0xd8, 0xff], name: 'a JPEG picture', packed: false },
	{ bytes: ascii('GIF8'), name: 'a GIF picture', packed: false },
	{ bytes: ascii('RIFF'), name: 'a picture, a film or a sound', packed: false },
	{ bytes: ascii('ftyp'), name: 'a film or a picture', packed: false, offset: 4 },
	{ bytes: [0x1a, 0x45, 0xdf, 0xa3], name: 'a film', packed: false },
	{ bytes: ascii('OggS'), name: 'a sound or a film', packed: false },
	{ bytes: ascii('PAR1'), name: 'a table in a binary form', packed: false },
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
	for (const { bytes, name, packed, offset = 0 } of SIGNATURES) {
		if (!bytes.every((byte, i) => head[offset + i] === byte)) continue;
		if (packed) {
			throw new KerbnoteError(
				'compressed_file',
				`the file is ${name}, not a CSV`,
				'Unpack it and upload the CSV inside',
				{ row: 1 }
			);
		}
		throw notText(`the file is ${name}, not a CSV`);
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
	if (visible === 0 && nulls === 0 && wholeFile) throw noText();
	if (
		control + nulls > 4 &&
		(control > MAX_CONTROL_SHARE * head.length || nulls > 4 * MAX_CONTROL_SHARE * head.length)
	) {
		throw notText('the file holds binary data, not text');
	}
}

function notText(message: string): KerbnoteError {
	return new KerbnoteError('not_text', message, 'Export the run as CSV and upload that file', { row: 1 });
}

/** The refusal of a file without a letter in it. */
export function noText(): KerbnoteError {
	return new KerbnoteError(
		'empty_file',
		'the file holds no text',
		'Export the run again and check that the file has a size'
	);
}

/** Tags with which web pages begin, whole ones and the pieces that a failing server writes. */
const PAGE =
	/^<(?:!doctype\s{1,9}html|html|head|body|title|meta|link|script|style|table|div|center|br|hr|pre|b|p|h[1-6]|font)[\s/>]/i;
const MARKUP = /^<(?:[?!]|[a-z][\w:.-]{0,60}[\s/>])/i;

/**
 * Refuses text that is another format: JSON, XML, HTML.
 *
 * @throws {KerbnoteError} `not_csv_html` for a web page, `not_csv`
 */
export function refuseForeignText(head: string): void {
	const text = head.trimStart();
	if (text.startsWith('<')) {
		// A page may begin with an XML declaration or a comment.
		if (PAGE.test(text) || (MARKUP.test(text) && /<html[\s>]/i.test(text.slice(0, 4096)))) {
			throw new KerbnoteError(
				'not_csv_html',
				'the file is a web page, not a table of comma-separated values',
				'Open it to see what the page says, then download or export the run again as CSV',
				{ row: 1 }
			);
		}
		if (MARKUP.test(text)) throw notCsv('markup (XML)');
	}
	const json =
		/^[{[]\s*(?:["[{\]}]|-?\d)/.test(text) &&
		/^[{[][\s\S]*["\d\]}]\s*[,:\]}]/.test(text) &&
		!/^\[[^\]\n]*\][,;\t|]/.test(text);
	if (json) throw notCsv('JSON');
}

function notCsv(name: string): KerbnoteError {
	return new KerbnoteError(
		'not_csv',
		`the file holds ${name}, not a table of comma-separated values`,
		'Export the run as CSV and upload that file',
		{ row: 1 }
	);
}

/**
 * Refuses a file whose first line does not end within what is looked at.
 *
 * @throws {KerbnoteError} `unclosed_quote`, `line_too_long`
 */
export function refuseEndlessLine(head: string): never {
	throw head.trimStart().startsWith('"') ? unclosedQuote(1) : tooLong(1);
}
