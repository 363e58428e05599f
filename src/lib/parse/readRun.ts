import type { RawRun } from './rawRun.ts';
import { RunReader } from './runReader.ts';
import type { ReadOptions } from './runReader.ts';

/** Bytes handed on at a time when the whole file is at hand. */
const CHUNK_BYTES = 1 << 20;

/**
 * Reads a whole file, from memory or from a stream.
 *
 * @returns its runs, at least one
 * @throws {KerbnoteError} where it holds none
 */
export async function readRun(bytes: Uint8Array | AsyncIterable<Uint8Array>, options: ReadOptions): Promise<RawRun[]> {
	const reader = new RunReader(options);
	if (bytes instanceof Uint8Array) {
		for (let at = 0; at < bytes.length; at += CHUNK_BYTES) reader.push(bytes.subarray(at, at + CHUNK_BYTES));
	} else for await (const chunk of bytes) reader.push(chunk);
	return reader.end();
}
