import type { Sample } from './recording.ts';

/** One column as a file has it. */
export interface WrittenColumn {
	header: string;
	/** the cell below the header, in files with a row of units */
	unit?: string;
	cell: (sample: Sample, i: number) => string | number;
}

export interface Dialect {
	delimiter?: string;
	decimal?: '.' | ',';
	lineEnd?: string;
	encoding?: TestEncoding;
	preamble?: readonly string[];
	footer?: readonly string[];
	unitRow?: boolean;
	/** false: no row of names */
	header?: boolean;
	quote?: boolean;
}

export type TestEncoding =
	| 'utf-8'
	| 'utf-8 bom'
	| 'utf-16le'
	| 'utf-16be'
	| 'utf-16le bom'
	| 'utf-16be bom'
	| 'latin-1'
	| 'windows-1250'
	| 'shift_jis';

/** The samples as the bytes of a file. */
export function writeFile(
	columns: readonly WrittenColumn[],
	samples: readonly Sample[],
	dialect: Dialect = {}
): Uint8Array {
	return encodeText(writeText(columns, samples, dialect), dialect.encoding);
}

export function writeText(
	columns: readonly WrittenColumn[],
	samples: readonly Sample[],
	dialect: Dialect = {}
): string {
	const { delimiter = ',', decimal = '.', lineEnd = '\n', preamble = [], footer = [], unitRow = false } = dialect;
	const cellText = (value: string | number) =>
		typeof value === 'number' ? String(value).replace('.', decimal) : value;
	const quoted = (cell: string) =>
		dialect.quote || (delimiter !== ' ' && cell.includes(delimiter)) ? `"${cell.replaceAll('"', '""')}"` : cell;
	const row = (cells: readonly string[]) => cells.map(quoted).join(delimiter);
	const lines = [...preamble];
	if (dialect.header !== false) lines.push(row(columns.map(({ header }) => header)));
	if (unitRow) lines.push(row(columns.map(({ unit }) => unit ?? '')));
	samples.forEach((sample, i) => lines.push(row(columns.map(({ cell }) => cellText(cell(sample, i))))));
	return [...lines, ...footer].join(lineEnd) + lineEnd;
}

/** Letters beyond ASCII that the tests need, as the encodings that have no encoder in the platform write them. */
const WINDOWS_1250 = new Map(
	[...'ąćęłńóśźżĄĆĘŁŃÓŚŹŻ°²'].map((letter, i) => [
		letter,
		[
			0xb9, 0xe6, 0xea, 0xb3, 0xf1, 0xf3, 0x9c, 0x9f, 0xbf, 0xa5, 0xc6, 0xca, 0xa3, 0xd1, 0xd3, 0x8c, 0x8f, 0xaf, 0xb0,
			0xb2
		][i]
	])
);

export function encodeText(text: string, encoding: TestEncoding = 'utf-8'): Uint8Array {
	if (encoding === 'utf-8') return new TextEncoder().encode(text);
	if (encoding === 'utf-8 bom') return new TextEncoder().encode(`\ufeff${text}`);
	if (encoding === 'latin-1') return Uint8Array.from(text, (letter) => letter.charCodeAt(0));
	if (encoding === 'windows-1250')
		return Uint8Array.from(text, (letter) => WINDOWS_1250.get(letter) ?? letter.charCodeAt(0));
	if (encoding === 'shift_jis') return encodeShiftJis(text);
	const marked = encoding.endsWith('bom') ? `\ufeff${text}` : text;
	const bytes = new Uint8Array(marked.length * 2);
	const view = new DataView(bytes.buffer);
	for (let i = 0; i < marked.length; i++) view.setUint16(i * 2, marked.charCodeAt(i), encoding.startsWith('utf-16le'));
	return bytes;
}

/** By decoding each pair of bytes once: the platform reads Shift-JIS but does not write it. */
function encodeShiftJis(text: string): Uint8Array {
	const pairs = new Map<string, readonly number[]>();
	const decoder = new TextDecoder('shift_jis');
	for (let lead = 0x81; lead <= 0xef; lead++) {
		if (lead >= 0xa0 && lead < 0xe0) continue;
		for (let trail = 0x40; trail <= 0xfc; trail++) pairs.set(decoder.decode(Uint8Array.of(lead, trail)), [lead, trail]);
	}
	return Uint8Array.from([...text].flatMap((letter) => pairs.get(letter) ?? [letter.charCodeAt(0)]));
}
