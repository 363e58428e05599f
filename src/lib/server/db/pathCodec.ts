import { deflateRawSync, inflateRawSync } from 'node:zlib';
import { packColumn, unpackColumn } from '../../analysis/trace/packColumn.ts';
import type { ReferencePath } from '../../analysis/model.ts';

export const PATH_CODEC = 1;

/** Whole numbers to one unit: millimetres, a radius of 300 m to 0.03 %, hundredths of km/h. */
const COLUMNS = { xM: 1000, yM: 1000, curvaturePerM: 1_000_000, speedKmh: 100 } as const;
type PathColumn = keyof typeof COLUMNS;
const NAMES = Object.keys(COLUMNS) as PathColumn[];
const LENGTH_BYTES = 4;

/** The columns of a path as one blob: for each its length in bytes (32 bits, little end first) and `packColumn`, all deflated. */
export function encodePath(path: Pick<ReferencePath, PathColumn>): Buffer {
	const parts: Uint8Array[] = [];
	for (const name of NAMES) {
		const packed = packColumn(path[name], COLUMNS[name]);
		const length = Buffer.alloc(LENGTH_BYTES);
		length.writeUInt32LE(packed.length);
		parts.push(length, packed);
	}
	return deflateRawSync(Buffer.concat(parts), { level: 9 });
}

/** @throws {RangeError} if the blob was written by a newer version or is broken */
export function decodePath(codec: number, payload: Buffer): Record<PathColumn, Float64Array> {
	if (codec !== PATH_CODEC) throw new RangeError(`decodePath requires codec ${PATH_CODEC}, got ${codec}`);
	const bytes = inflateRawSync(payload);
	let at = 0;
	const next = (name: PathColumn): Float64Array => {
		const length = bytes.readUInt32LE(at);
		at += LENGTH_BYTES;
		const column = unpackColumn(bytes.subarray(at, at + length), COLUMNS[name], (size) => new Float64Array(size));
		at += length;
		return column;
	};
	return { xM: next('xM'), yM: next('yM'), curvaturePerM: next('curvaturePerM'), speedKmh: next('speedKmh') };
}

const OUTLINE_POINTS = 120;

/** The path in at most 120 points, decimetres: enough for a picture of the size of a stamp. */
export function outlineOf({ xM, yM }: Pick<ReferencePath, 'xM' | 'yM'>): [number, number][] {
	const step = Math.max(1, xM.length / OUTLINE_POINTS);
	const outline: [number, number][] = [];
	for (let i = 0; i < xM.length; i += step) {
		const [x, y] = [xM[Math.floor(i)], yM[Math.floor(i)]];
		if (Number.isFinite(x) && Number.isFinite(y)) outline.push([Math.round(x * 10) / 10, Math.round(y * 10) / 10]);
	}
	return outline;
}
