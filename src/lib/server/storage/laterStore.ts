import type { Readable } from 'node:stream';
import type { KeptFile, RawStore } from './rawStore.ts';

/** A store elsewhere, whose client is loaded with its first use: most installations keep their files in a folder and need none. */
export class LaterStore implements RawStore {
	#store: Promise<RawStore> | undefined;

	constructor(private readonly load: () => Promise<RawStore>) {}

	#ready(): Promise<RawStore> {
		return (this.#store ??= this.load());
	}

	async write(key: string, source: AsyncIterable<Uint8Array>, limitBytes: number): Promise<KeptFile> {
		return await (await this.#ready()).write(key, source, limitBytes);
	}

	async adopt(key: string, path: string): Promise<KeptFile> {
		return await (await this.#ready()).adopt(key, path);
	}

	async read(key: string): Promise<Readable> {
		return await (await this.#ready()).read(key);
	}

	async has(key: string): Promise<boolean> {
		return await (await this.#ready()).has(key);
	}

	async measure(key: string): Promise<KeptFile | null> {
		return await (await this.#ready()).measure(key);
	}

	async remove(key: string): Promise<void> {
		await (await this.#ready()).remove(key);
	}

	async removePart(key: string): Promise<void> {
		await (await this.#ready()).removePart(key);
	}

	async *list(before: Date): AsyncIterable<{ key: string; whole: boolean }> {
		yield* (await this.#ready()).list(before);
	}

	/** Files lie elsewhere. */
	localPath(): null {
		return null;
	}
}
