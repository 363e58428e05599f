import { packColumn, unpackColumn } from './packColumn.ts';

/**
 * A stretch of a lap as one binary answer: four bytes "KNT1", the length of the header (32 bits, little end first), the header
 * as JSON padded with spaces, then the columns, each where the header says, at a multiple of eight bytes.
 *
 * A column is `float32` or `float64` (little end first; NaN is a gap) or `packed` (see `packColumn`), which is a third of the
 * bytes and keeps every stored digit.
 */

export type ColumnEncoding = 'float32' | 'float64' | 'packed';

export interface FrameColumn {
	channel: string;
	unit: string;
	encoding: ColumnEncoding;
	/** whole numbers to one unit: the resolution at which the values are stored */
	perUnit: number;
	/** entries */
	count: number;
	/** from the first byte of the frame */
	byteOffset: number;
	byteLength: number;
}

export interface FrameHeader {
	lap: string;
	/** of the path */
	lengthM: number;
	/** s of the first entry, m; negative before the line */
	fromM: number;
	stepM: 1;
	lapTimeS: number;
	columns: FrameColumn[];
}

/** A frame as it is used: columns by channel. */
export interface TraceFrame extends Omit<FrameHeader, 'columns'> {
	columns: Map<string, { unit: string; values: Float32Array | Float64Array }>;
}

export interface ColumnInput {
	channel: string;
	unit: string;
	perUnit: number;
	values: Float64Array;
}

const MAGIC = 'KNT1';
const ALIGNMENT = 8;
const LEAD_BYTES = 8;

/**
 * @param columns of equal length
 * @param isPacked every column packed; else Float32, and time Float64, for a Float32 of 100 s knows no microsecond
 */
export function encodeTraceFrame(
	header: Omit<FrameHeader, 'columns' | 'stepM'>,
	columns: readonly ColumnInput[],
	isPacked: boolean
): Uint8Array<ArrayBuffer> {
	const bodies = columns.map((column) => bodyOf(column, isPacked));
	const described = (offset: number): string => {
		let byteOffset = offset;
		const entries = columns.map(({ channel, unit, perUnit, values }, i): FrameColumn => {
			const { encoding, bytes } = bodies[i];
			const entry = { channel, unit, encoding, perUnit, count: values.length, byteOffset, byteLength: bytes.length };
			byteOffset = aligned(byteOffset + bytes.length);
			return entry;
		});
		return JSON.stringify({ ...header, stepM: 1, columns: entries } satisfies FrameHeader);
	};
	// The header names offsets, whose digits make the header longer: room for the longest that they can become.
	const longest = described(9_999_999).length;
	const bodyOffset = aligned(LEAD_BYTES + new TextEncoder().encode(described(9_999_999)).length);
	const text = new TextEncoder().encode(described(bodyOffset).padEnd(longest));
	const frame = new Uint8Array(bodyOffset + bodies.reduce((sum, { bytes }) => aligned(sum + bytes.length), 0));
	frame.fill(0x20, 0, bodyOffset);
	frame.set(new TextEncoder().encode(MAGIC), 0);
	new DataView(frame.buffer).setUint32(4, bodyOffset - LEAD_BYTES, true);
	frame.set(text, LEAD_BYTES);
	let at = bodyOffset;
	for (const { bytes } of bodies) {
		frame.set(bytes, at);
		at = aligned(at + bytes.length);
	}
	return frame;
}

const aligned = (offset: number): number => Math.ceil(offset / ALIGNMENT) * ALIGNMENT;

function bodyOf(
	{ channel, values, perUnit }: ColumnInput,
	isPacked: boolean
): { encoding: ColumnEncoding; bytes: Uint8Array } {
	if (isPacked) return { encoding: 'packed', bytes: packColumn(values, perUnit) };
	const wide = channel === 'timeS';
	const bytes = new Uint8Array(values.length * (wide ? 8 : 4));
	const view = new DataView(bytes.buffer);
	values.forEach((value, i) => (wide ? view.setFloat64(i * 8, value, true) : view.setFloat32(i * 4, value, true)));
	return { encoding: wide ? 'float64' : 'float32', bytes };
}

/**
 * @param frame from `encodeTraceFrame`, as it came over the wire
 * @throws {RangeError} if it is no frame or is cut short
 */
export function decodeTraceFrame(frame: ArrayBuffer): TraceFrame {
	const bytes = new Uint8Array(frame);
	if (bytes.length < LEAD_BYTES || new TextDecoder().decode(bytes.subarray(0, 4)) !== MAGIC) {
		throw new RangeError('decodeTraceFrame requires a frame that begins with KNT1');
	}
	const headerLength = new DataView(frame).getUint32(4, true);
	if (LEAD_BYTES + headerLength > bytes.length) throw new RangeError('decodeTraceFrame requires a whole header');
	const { columns, ...header } = readHeader(
		new TextDecoder().decode(bytes.subarray(LEAD_BYTES, LEAD_BYTES + headerLength))
	);
	return {
		...header,
		columns: new Map(
			columns.map((column) => [column.channel, { unit: column.unit, values: readColumn(frame, column) }])
		)
	};
}

function readColumn(frame: ArrayBuffer, column: FrameColumn): Float32Array | Float64Array {
	const { encoding, perUnit, count, byteOffset, byteLength } = column;
	if (!(byteOffset + byteLength <= frame.byteLength)) throw new RangeError('decodeTraceFrame requires whole columns');
	if (encoding === 'packed') {
		const make = (length: number): Float32Array | Float64Array =>
			column.channel === 'timeS' ? new Float64Array(length) : new Float32Array(length);
		return unpackColumn(new Uint8Array(frame, byteOffset, byteLength), perUnit, make);
	}
	const view = new DataView(frame, byteOffset, byteLength);
	if (encoding === 'float64') return Float64Array.from({ length: count }, (_, i) => view.getFloat64(i * 8, true));
	return Float32Array.from({ length: count }, (_, i) => view.getFloat32(i * 4, true));
}

/** Checked by hand: the card's script carries no schema library. */
function readHeader(text: string): FrameHeader {
	const header: unknown = JSON.parse(text);
	if (!isFrameHeader(header)) throw new RangeError('decodeTraceFrame requires a header that names its columns');
	return header;
}

function isFrameHeader(value: unknown): value is FrameHeader {
	if (typeof value !== 'object' || value === null || !('columns' in value) || !Array.isArray(value.columns))
		return false;
	const isNumber = (name: string) => name in value && typeof value[name as keyof typeof value] === 'number';
	return isNumber('lengthM') && isNumber('fromM') && isNumber('lapTimeS') && value.columns.every(isFrameColumn);
}

function isFrameColumn(value: unknown): value is FrameColumn {
	if (typeof value !== 'object' || value === null) return false;
	const numbers = ['perUnit', 'count', 'byteOffset', 'byteLength'];
	const entries = new Map(Object.entries(value));
	return (
		numbers.every((name) => Number.isFinite(entries.get(name))) &&
		typeof entries.get('channel') === 'string' &&
		typeof entries.get('unit') === 'string' &&
		['float32', 'float64', 'packed'].includes(String(entries.get('encoding')))
	);
}
