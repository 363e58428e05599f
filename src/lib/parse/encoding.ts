import { KerbnoteError } from '../schemas/kerbnoteError.ts';

export type Encoding = 'utf-8' | 'utf-16le' | 'utf-16be' | 'shift_jis' | 'windows-1252' | 'latin-1';

export interface DetectedEncoding {
	encoding: Encoding;
	/** bytes of the byte order mark */
	markBytes: number;
	/** no mark and not UTF-8: told from the bytes alone */
	assumed: boolean;
}

/** The label that TextDecoder knows. */
export function decoderLabel(encoding: Encoding): string {
	return encoding === 'latin-1' ? 'windows-1252' : encoding;
}

/**
 * Tells the encoding from the first bytes: byte order mark, the null pattern of UTF-16, valid UTF-8, then Shift-JIS against
 * Western single bytes. In Shift-JIS most bytes beyond ASCII are lead bytes 0x81–0x9F followed by a valid trail byte, a range
 * that Western text leaves nearly empty.
 *
 * @throws {KerbnoteError} `unknown_encoding` for UTF-32
 */
export function detectEncoding(head: Uint8Array): DetectedEncoding {
	const first = (head[0] << 24) | (head[1] << 16) | (head[2] << 8) | head[3];
	if (head.length >= 4 && (first === 0xfffe0000 >> 0 || first === 0x0000feff)) {
		throw new KerbnoteError(
			'unknown_encoding',
			'the text is in UTF-32, which cannot be read',
			'Save the file as UTF-8 and upload it again'
		);
	}
	if (head[0] === 0xef && head[1] === 0xbb && head[2] === 0xbf)
		return { encoding: 'utf-8', markBytes: 3, assumed: false };
	if (head[0] === 0xff && head[1] === 0xfe) return { encoding: 'utf-16le', markBytes: 2, assumed: false };
	if (head[0] === 0xfe && head[1] === 0xff) return { encoding: 'utf-16be', markBytes: 2, assumed: false };
	const pairs = head.length >> 1;
	if (pairs >= 4) {
		let evenNulls = 0;
		let oddNulls = 0;
		for (let i = 0; i < pairs * 2; i += 2) {
			if (head[i] === 0) evenNulls++;
			if (head[i + 1] === 0) oddNulls++;
		}
		// Digits and delimiters have a null half in UTF-16; numbers make up nearly all of a table.
		if (oddNulls > 0.6 * pairs && evenNulls < 0.1 * pairs) return { encoding: 'utf-16le', markBytes: 0, assumed: true };
		if (evenNulls > 0.6 * pairs && oddNulls < 0.1 * pairs) return { encoding: 'utf-16be', markBytes: 0, assumed: true };
	}
	if (isUtf8(head)) return { encoding: 'utf-8', markBytes: 0, assumed: false };
	return { encoding: singleOrShiftJis(head), markBytes: 0, assumed: true };
}

function isUtf8(head: Uint8Array): boolean {
	try {
		new TextDecoder('utf-8', { fatal: true }).decode(head, { stream: true });
		return true;
	} catch {
		return false;
	}
}

function singleOrShiftJis(head: Uint8Array): Encoding {
	let pairs = 0;
	let broken = 0;
	let high = 0;
	let control = 0;
	for (let i = 0; i < head.length; i++) {
		const byte = head[i];
		if (byte < 0x80) continue;
		high++;
		if (byte < 0xa0) control++;
		if ((byte >= 0x81 && byte <= 0x9f) || (byte >= 0xe0 && byte <= 0xfc)) {
			const trail = head[i + 1];
			if (trail !== undefined && trail >= 0x40 && trail <= 0xfc && trail !== 0x7f) {
				if (byte <= 0x9f) pairs++;
				if (trail >= 0x80) high++;
				i++;
			} else if (i + 1 < head.length) broken++;
		} else if (byte === 0x80 || byte > 0xdf) broken++;
	}
	if (broken === 0 && pairs >= 2 && pairs * 4 >= high) return 'shift_jis';
	return control > 0 ? 'windows-1252' : 'latin-1';
}
