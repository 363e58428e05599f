/**
 * One column of numbers as few bytes: whole numbers at the sensor's resolution, the second difference of them, zigzag, varint.
 * What is left is small and repetitive, so that any deflate shortens it well. Pure: runs in server, worker and browser.
 *
 * Bytes: varint n · varint 2 · number of gaps + (1 where a number needs more than 31 bits) · for each gap varint entries since the
 * last gap's end, varint length · for each entry outside the gaps the zigzag varint of its second difference (of the first entry:
 * itself). A gap costs nothing but its own entry in the list.
 */

/** Beyond this a whole number and its differences are not exact in a double. */
const LARGEST = Number.MAX_SAFE_INTEGER / 8;
/** Up to here the fast loop's 32-bit arithmetic holds numbers and differences alike. */
const LARGEST_NARROW = 2 ** 30 - 1;
const LONGEST_VARINT_BYTES = 8;
/** 16 million entries: hours of samples. Keeps broken bytes from asking for all memory. */
const LONGEST_COLUMN = 2 ** 24;

/**
 * @param values   n ≥ 0 numbers; NaN is a gap
 * @param perUnit  whole numbers to one unit: 100 keeps two decimals
 * @returns bytes for `unpackColumn`
 * @throws {RangeError} if `perUnit` is not > 0, or a value is infinite or too large to be kept exactly
 * @example packColumn(Float64Array.of(1, 1.5, 2), 10) // => Uint8Array.of(3, 0, 20, 10, 0)
 */
export function packColumn(values: Float64Array | Float32Array, perUnit: number): Uint8Array<ArrayBuffer> {
	if (!(perUnit > 0)) throw new RangeError(`packColumn requires perUnit > 0, got ${perUnit}`);
	const gaps = gapsOf(values);
	const { rests, wide } = secondDifferences(values, perUnit);
	const bytes = new Uint8Array((gaps.length + rests.length + 2) * LONGEST_VARINT_BYTES);
	let at = 0;
	const put = (value: number): void => {
		while (value > 127) {
			bytes[at++] = (value % 128) + 128;
			value = Math.floor(value / 128);
		}
		bytes[at++] = value;
	};
	put(values.length);
	put(gaps.length + (wide ? 1 : 0));
	for (const number of gaps) put(number);
	for (const rest of rests) put(rest >= 0 ? rest * 2 : -rest * 2 - 1);
	return bytes.slice(0, at);
}

function secondDifferences(values: Float64Array | Float32Array, perUnit: number): { rests: number[]; wide: boolean } {
	const rests: number[] = [];
	let wide = false;
	let last = 0;
	let lastStep = 0;
	for (const value of values) {
		if (Number.isNaN(value)) continue;
		const whole = Math.round(value * perUnit);
		if (!(Math.abs(whole) <= LARGEST)) throw new RangeError(`packColumn requires finite values in range, got ${value}`);
		const first = rests.length === 0;
		const step = first ? 0 : whole - last;
		const rest = first ? whole : step - lastStep;
		wide ||= Math.abs(whole) > LARGEST_NARROW || Math.abs(step) > LARGEST_NARROW || Math.abs(rest) > LARGEST_NARROW;
		rests.push(rest);
		last = whole;
		lastStep = step;
	}
	return { rests, wide };
}

/** Pairs (entries since the last gap's end, length). */
function gapsOf(values: Float64Array | Float32Array): number[] {
	const gaps: number[] = [];
	let lastEnd = 0;
	for (let i = 0; i < values.length; i++) {
		if (!Number.isNaN(values[i])) continue;
		const start = i;
		while (i < values.length && Number.isNaN(values[i])) i++;
		gaps.push(start - lastEnd, i - start);
		lastEnd = i;
	}
	return gaps;
}

/**
 * Budget: 5,000 entries in 20 µs, for it is the inner loop of every chart and comparison.
 *
 * @param bytes    from `packColumn`
 * @param perUnit  the same as when it was packed
 * @param make     makes the column that receives the values; Float64Array keeps microseconds of long laps
 * @returns the values, each the double (or float) nearest to whole / perUnit; NaN in gaps
 * @throws {RangeError} if the bytes are cut short or say more than they hold
 */
export function unpackColumn<Column extends Float64Array | Float32Array>(
	bytes: Uint8Array,
	perUnit: number,
	make: (length: number) => Column
): Column {
	const reader = new VarintReader(bytes);
	const length = reader.take();
	const flags = reader.take();
	const gaps: number[] = [];
	let missing = 0;
	for (let i = 0; i < Math.floor(flags / 2); i++) {
		gaps.push(reader.take(), reader.take());
		missing += gaps[gaps.length - 1];
	}
	const present = length - missing;
	if (!(length <= LONGEST_COLUMN && present >= 0 && present <= bytes.length - reader.at)) {
		throw new RangeError(`unpackColumn requires a byte for each entry, got ${bytes.length - reader.at} for ${present}`);
	}
	const column = make(length);
	if (flags % 2 === 1) readWide(reader, present, perUnit, column);
	else readNarrow(bytes, reader.at, present, perUnit, column);
	openGaps(column, present, gaps);
	return column;
}

/** Numbers under 31 bits: plain 32-bit arithmetic, no call for each entry. */
function readNarrow(
	bytes: Uint8Array,
	at: number,
	count: number,
	perUnit: number,
	column: Float64Array | Float32Array
) {
	let whole = 0;
	let step = 0;
	for (let i = 0; i < count; i++) {
		let byte = bytes[at++];
		let rest = byte & 127;
		for (let shift = 7; byte > 127 && shift < 32; shift += 7) {
			byte = bytes[at++];
			rest |= (byte & 127) << shift;
		}
		rest = (rest >>> 1) ^ -(rest & 1);
		if (i === 0) whole = rest;
		else {
			step = (step + rest) | 0;
			whole = (whole + step) | 0;
		}
		column[i] = whole / perUnit;
	}
	if (at > bytes.length) throw new RangeError('unpackColumn requires whole bytes, got a column that is cut short');
}

function readWide(reader: VarintReader, count: number, perUnit: number, column: Float64Array | Float32Array) {
	let whole = 0;
	let step = 0;
	for (let i = 0; i < count; i++) {
		const zigzag = reader.take();
		const rest = zigzag % 2 === 0 ? zigzag / 2 : -(zigzag + 1) / 2;
		if (i > 0) step += rest;
		whole += i === 0 ? rest : step;
		column[i] = whole / perUnit;
	}
}

/** Moves the entries, which lie together at the front, to their places; from the back, so that none is overwritten. */
function openGaps(column: Float64Array | Float32Array, present: number, gaps: readonly number[]) {
	let gapEnd = gaps.reduce((sum, number) => sum + number, 0);
	let missing = column.length - present;
	let from = present;
	for (let i = gaps.length - 2; i >= 0; i -= 2) {
		const [sinceLastGap, length] = [gaps[i], gaps[i + 1]];
		missing -= length;
		const entriesBefore = gapEnd - length - missing;
		if (gapEnd > column.length || entriesBefore > from) {
			throw new RangeError('unpackColumn requires gaps inside the column, got one beyond its end');
		}
		column.copyWithin(gapEnd, entriesBefore, from);
		column.fill(NaN, gapEnd - length, gapEnd);
		from = entriesBefore;
		gapEnd -= length + sinceLastGap;
	}
}

class VarintReader {
	at = 0;
	constructor(private readonly bytes: Uint8Array) {}

	take(): number {
		let value = 0;
		let factor = 1;
		for (;;) {
			if (this.at >= this.bytes.length)
				throw new RangeError('unpackColumn requires whole bytes, got a column that is cut short');
			const byte = this.bytes[this.at++];
			if (byte < 128) return value + byte * factor;
			value += (byte - 128) * factor;
			factor *= 128;
		}
	}
}
