import type { Readable } from 'node:stream';

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
