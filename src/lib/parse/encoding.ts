import { KerbnoteError } from '../schemas/kerbnoteError.ts';

export type Encoding =
	| 'utf-8'
	| 'utf-16le'
	| 'utf-16be'
	| 'shift_jis'
	| 'euc-jp'
	| 'windows-1250'
	| 'iso-8859-2'
	| 'windows-1252'
	| 'latin-1';

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
 * Tells the encoding from the first bytes: byte order mark, the null pattern of UTF-16, valid UTF-8, then Japanese
 * and Central European against Western single bytes. In Shift-JIS most bytes beyond ASCII are lead bytes 0x81–0x9F followed by a valid trail byte, a range
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
	if (isEucJp(head)) return 'euc-jp';
	return centralEuropean(head) ?? (control > 0 ? 'windows-1252' : 'latin-1');
}

/** In EUC-JP letters beyond ASCII are pairs of bytes from 0xA1 on; Western accents mostly stand alone. */
function isEucJp(head: Uint8Array): boolean {
	let pairs = 0;
	for (let i = 0; i < head.length; i++) {
		if (head[i] < 0x80) continue;
		if (i + 1 === head.length) break;
		if (head[i] < 0xa1 || head[i] === 0xff || head[i + 1] < 0xa1 || head[i + 1] === 0xff) return false;
		pairs++;
		i++;
	}
	return pairs >= 4;
}

/** ł, ą, ż, ź of Windows-1250, which are ³ ¹ ¿ Ÿ in the West and never stand inside a word there. */
const WITHIN_1250 = new Set([0xb3, 0xb9, 0xbf, 0x9f]);
/** ą, ś, ź of ISO 8859-2: ± ¶ ¼ in the West. */
const WITHIN_8859_2 = new Set([0xb1, 0xb6, 0xbc]);

/** Central European text by letters that make no sense within a Western word; null where there are none. */
function centralEuropean(head: Uint8Array): Encoding | null {
	const isLetter = (byte: number | undefined) => byte !== undefined && /[a-z]/i.test(String.fromCharCode(byte));
	let [windows, iso] = [0, 0];
	for (let i = 1; i < head.length; i++) {
		// A power stands behind its unit (m³), a letter before the next one.
		if (!isLetter(head[i + 1]) && !(isLetter(head[i - 1]) && isLetter(head[i - 2]))) continue;
		if (WITHIN_1250.has(head[i])) windows++;
		else if (WITHIN_8859_2.has(head[i])) iso++;
	}
	if (windows === 0 && iso === 0) return null;
	return iso > windows ? 'iso-8859-2' : 'windows-1250';
}
