import { createWriteStream } from 'node:fs';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';

/** A raw file as it was kept. */
export interface KeptFile {
	sizeBytes: number;
	sha256: Buffer;
}

/** Where raw files lie, byte for byte as they were handed over. A key is written once and never changes. */
export interface RawStore {
	/**
	 * Keeps a stream: either all of it is there under the key afterwards, or nothing.
	 *
	 * @throws {FileTooLarge} beyond `limitBytes`
	 */
	write(key: string, source: AsyncIterable<Uint8Array>, limitBytes: number): Promise<KeptFile>;
	/** Keeps a file of this machine, which is gone from its place afterwards. May be called again while it is there. */
	adopt(key: string, path: string): Promise<KeptFile>;
	/** @throws {FileMissing} when nothing is kept under the key */
	read(key: string): Promise<Readable>;
	has(key: string): Promise<boolean>;
	/** Measures what is kept, or null when nothing is. */
	measure(key: string): Promise<KeptFile | null>;
	/** Removes what is kept; nothing there is no error. */
	remove(key: string): Promise<void>;
	/** Keys of everything that was kept before the time, also of writes that never ended (those have `whole` false). */
	list(before: Date): AsyncIterable<{ key: string; whole: boolean }>;
	/** Removes what a write that never ended has left. */
	removePart(key: string): Promise<void>;
	/** Path on this machine, for a reader in another thread; null where files lie elsewhere. */
	localPath(key: string): string | null;
}

/**
 * Hands a raw file to a reader that needs a path: where it lies, else as a copy that is gone afterwards.
 *
 * @throws {FileMissing}
 */
export async function withLocalFile<T>(store: RawStore, key: string, work: (path: string) => Promise<T>): Promise<T> {
	const path = store.localPath(key);
	if (path !== null) {
		if (!(await store.has(key))) throw new FileMissing(key);
		return await work(path);
	}
	const folder = await mkdtemp(join(tmpdir(), 'kerbnote-'));
	try {
		const copy = join(folder, 'raw');
		await pipeline(await store.read(key), createWriteStream(copy, { mode: 0o600 }));
		return await work(copy);
	} finally {
		await rm(folder, { recursive: true, force: true });
	}
}

export class FileTooLarge extends Error {
	constructor(readonly limitBytes: number) {
		super(`a file requires at most ${limitBytes} bytes`);
		this.name = 'FileTooLarge';
	}
}

export class FileMissing extends Error {
	constructor(key: string) {
		super(`no file is kept under ${key}`);
		this.name = 'FileMissing';
	}
}
