import { createReadStream } from 'node:fs';
import { open } from 'node:fs/promises';
import { createGunzip } from 'node:zlib';
import { KerbnoteError } from '../../schemas/kerbnoteError.ts';

const CHUNK_BYTES = 1 << 20;
/** What a compressed file may become: four times what may be handed over as it is. */
export const LARGEST_INFLATED_BYTES = 2 * 1024 ** 3;
/** Tables of a run shrink to a fifth or a twentieth; thousands of equal rows to a thousandth, and those are no run. */
const LARGEST_RATIO = 250;
/** Below this no ratio does harm. */
const HARMLESS_BYTES = 64 << 20;

/** The first bytes of a file on this machine. */
export async function firstBytes(path: string, count: number): Promise<Buffer> {
	const file = await open(path, 'r');
	try {
		const { bytesRead, buffer } = await file.read(Buffer.alloc(count), 0, count, 0);
		return buffer.subarray(0, bytesRead);
	} finally {
		await file.close();
	}
}

/** RFC 1952. */
export function isGzip(head: Uint8Array): boolean {
	return head.length >= 2 && head[0] === 0x1f && head[1] === 0x8b;
}

/**
 * The text of a raw file, gzip taken off.
 *
 * @throws {KerbnoteError} `compressed_file` where it cannot be unpacked, or unpacks to more than any run is
 */
export async function plainBytes(path: string): Promise<AsyncIterable<Uint8Array>> {
	const source = createReadStream(path, { highWaterMark: CHUNK_BYTES });
	return isGzip(await firstBytes(path, 2)) ? inflated(source) : source;
}

async function* inflated(source: NodeJS.ReadableStream): AsyncIterable<Uint8Array> {
	const gunzip = createGunzip({ chunkSize: CHUNK_BYTES });
	source.once('error', (error) => gunzip.destroy(error));
	let total = 0;
	try {
		for await (const chunk of source.pipe(gunzip)) {
			const bytes: Uint8Array = chunk;
			total += bytes.length;
			checkInflated(total, gunzip.bytesWritten);
			yield bytes;
		}
	} catch (cause) {
		if (!(cause instanceof Error && 'code' in cause && String(cause.code).startsWith('Z_'))) throw cause;
		throw new KerbnoteError(
			'compressed_file',
			'the file is compressed with gzip but cannot be unpacked',
			'Export or compress it again',
			{},
			{ cause }
		);
	}
}

/**
 * Counted while it is unpacked: what a header says of the size is not believed.
 *
 * @throws {KerbnoteError} `compressed_file` beyond what any run unpacks to
 */
export function checkInflated(inflatedBytes: number, compressedBytes: number): void {
	const isBomb = inflatedBytes > HARMLESS_BYTES && inflatedBytes > LARGEST_RATIO * compressedBytes;
	if (inflatedBytes <= LARGEST_INFLATED_BYTES && !isBomb) return;
	throw new KerbnoteError(
		'compressed_file',
		isBomb
			? `the compressed file requires at most ${LARGEST_RATIO} times its size unpacked, got more`
			: 'the compressed file requires at most 2 GB unpacked, got more',
		'Cut the recording into runs, and compress it again or not at all'
	);
}
