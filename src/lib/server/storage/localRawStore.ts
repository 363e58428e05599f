import { createHash } from 'node:crypto';
import { createReadStream, createWriteStream } from 'node:fs';
import { mkdir, open, readdir, rename, rm, stat } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import type { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { FileMissing, FileTooLarge, type KeptFile, type RawStore } from './rawStore.ts';

const PART = '.part';
/** Two characters of folder, so that no folder grows beyond use; nothing that could leave the root. */
const KEY = /^[0-9a-z]{2}\/[0-9a-z]{4,64}$/;

/**
 * Raw files in a folder. A file is written beside its place, made durable and then renamed, so that a name always stands for a
 * whole file, whenever the process or the machine stops.
 */
export class LocalRawStore implements RawStore {
	constructor(private readonly root: string) {}

	async write(key: string, source: AsyncIterable<Uint8Array>, limitBytes: number): Promise<KeptFile> {
		const path = this.localPath(key);
		await mkdir(dirname(path), { recursive: true, mode: 0o700 });
		const part = path + PART;
		const hash = createHash('sha256');
		let sizeBytes = 0;
		const measured = async function* (): AsyncIterable<Uint8Array> {
			for await (const chunk of source) {
				sizeBytes += chunk.length;
				if (sizeBytes > limitBytes) throw new FileTooLarge(limitBytes);
				hash.update(chunk);
				yield chunk;
			}
		};
		try {
			await pipeline(measured, createWriteStream(part, { mode: 0o600, flush: true }));
			await rename(part, path);
			await makeDurable(dirname(path));
		} catch (error) {
			await rm(part, { force: true });
			throw error;
		}
		return { sizeBytes, sha256: hash.digest() };
	}

	async adopt(key: string, path: string): Promise<KeptFile> {
		const place = this.localPath(key);
		await mkdir(dirname(place), { recursive: true, mode: 0o700 });
		const kept = await measureFile(path);
		await makeDurable(path);
		await rename(path, place);
		await makeDurable(dirname(place));
		return kept;
	}

	async read(key: string): Promise<Readable> {
		if (!(await this.has(key))) throw new FileMissing(key);
		return createReadStream(this.localPath(key), { highWaterMark: 1 << 20 });
	}

	async has(key: string): Promise<boolean> {
		return (await stat(this.localPath(key)).catch(() => null)) !== null;
	}

	async measure(key: string): Promise<KeptFile | null> {
		return (await this.has(key)) ? await measureFile(this.localPath(key)) : null;
	}

	async remove(key: string): Promise<void> {
		await rm(this.localPath(key), { force: true });
	}

	async removePart(key: string): Promise<void> {
		await rm(this.localPath(key) + PART, { force: true });
	}

	async *list(before: Date): AsyncIterable<{ key: string; whole: boolean }> {
		for (const folder of await namesIn(this.root)) {
			for (const name of await namesIn(join(this.root, folder))) {
				const whole = !name.endsWith(PART);
				const key = `${folder}/${whole ? name : name.slice(0, -PART.length)}`;
				if (!KEY.test(key)) continue;
				const about = await stat(join(this.root, folder, name)).catch(() => null);
				if (about && about.mtime < before) yield { key, whole };
			}
		}
	}

	localPath(key: string): string {
		if (!KEY.test(key))
			throw new RangeError(`LocalRawStore requires a key such as "ab/abcdef", got ${JSON.stringify(key)}`);
		return join(this.root, key);
	}
}

async function namesIn(folder: string): Promise<string[]> {
	try {
		return await readdir(folder);
	} catch {
		return [];
	}
}

async function measureFile(path: string): Promise<KeptFile> {
	const hash = createHash('sha256');
	let sizeBytes = 0;
	for await (const chunk of createReadStream(path, { highWaterMark: 1 << 20 })) {
		const bytes: Uint8Array = chunk;
		sizeBytes += bytes.length;
		hash.update(bytes);
	}
	return { sizeBytes, sha256: hash.digest() };
}

/** A file, or a folder: a rename is durable once its folder is. */
async function makeDurable(path: string): Promise<void> {
	const handle = await open(path, 'r');
	try {
		await handle.sync();
	} finally {
		await handle.close();
	}
}
