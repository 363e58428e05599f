import type { FileHandle } from 'node:fs/promises';

const CHUNK_BYTES = 1 << 20;

/**
 * The bytes of an open file in two buffers that take turns: while one is worked on the other is filled, and nothing is allocated on the way.
 * A chunk holds until the next one is asked for.
 */
export async function* readChunks(handle: FileHandle): AsyncGenerator<Uint8Array> {
	const buffers = [new Uint8Array(CHUNK_BYTES), new Uint8Array(CHUNK_BYTES)];
	let position = 0;
	let pending = handle.read(buffers[0], 0, CHUNK_BYTES, 0);
	try {
		for (let turn = 0; ; turn = 1 - turn) {
			const { bytesRead } = await pending;
			if (bytesRead === 0) return;
			position += bytesRead;
			pending = handle.read(buffers[1 - turn], 0, CHUNK_BYTES, position);
			yield buffers[turn].subarray(0, bytesRead);
		}
	} finally {
		// Whoever stops early closes the file; a read under way must have ended by then.
		await pending.catch(() => null);
	}
}
