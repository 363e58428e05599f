import { readdir, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { FileStore } from '@tus/file-store';
import { Upload } from '@tus/server';
import type { Knex } from 'knex';
import { decodePublicId } from '../../db/publicId.ts';
import { environment } from '../../environment.ts';

/** Where files lie while they come in piece by piece; all nodes must see it. */
export function partFolder(): string {
	return join(environment().KERBNOTE_STORAGE, 'resumable');
}

interface UploadRow {
	state: string;
	file_name: string;
	size_bytes: number;
	created_at: Date;
}

/**
 * Files that come in piece by piece. How far one is says the file itself, so that nothing has to be put right after a crash; what
 * is known about it stands in its row of `uploads`.
 */
export class PartStore extends FileStore {
	constructor(private readonly db: Knex) {
		super({
			directory: partFolder(),
			configstore: {
				get: async (id) => await readUpload(db, id),
				// The row was written before the first byte came in.
				set: async () => {},
				delete: async (id) => {
					await db('uploads')
						.where({ public_id: keyOf(id), state: 'receiving' })
						.delete();
				}
			}
		});
		this.extensions = ['creation', 'creation-with-upload', 'termination'];
	}

	/** A file that has moved on to the raw store is whole: whoever asks again reads that all of it is here. */
	override async getUpload(id: string): Promise<Upload> {
		const row = await findRow(this.db, id);
		if (!row || row.state === 'receiving') return await super.getUpload(id);
		return uploadOf(id, row, row.size_bytes);
	}

	/** Removes bytes and row; bytes that are gone already are no error. */
	override async remove(id: string): Promise<void> {
		await rm(partPath(id), { force: true });
		await this.db('uploads')
			.where({ public_id: keyOf(id), state: 'receiving' })
			.delete();
	}
}

/** @throws {RangeError} for anything but a public id, which alone names a file */
export function partPath(id: string): string {
	if (!decodePublicId(id)) throw new RangeError(`a part requires a public id, got ${JSON.stringify(id.slice(0, 40))}`);
	return join(partFolder(), id);
}

/** Bytes of a part; null where there is none. */
export async function partSize(id: string): Promise<number | null> {
	return (await stat(partPath(id)).catch(() => null))?.size ?? null;
}

/** Ids of parts that nobody has touched since the time. */
export async function listParts(before: Date): Promise<string[]> {
	const names = await readdir(partFolder()).catch(() => []);
	const old: string[] = [];
	for (const name of names) {
		if (!decodePublicId(name)) continue;
		const about = await stat(join(partFolder(), name)).catch(() => null);
		if (about && about.mtime < before) old.push(name);
	}
	return old;
}

const keyOf = (id: string): Buffer => decodePublicId(id) ?? Buffer.alloc(0);

async function findRow(db: Knex, id: string): Promise<UploadRow | undefined> {
	return await db('uploads')
		.where({ public_id: keyOf(id), is_resumable: true })
		.first<UploadRow | undefined>('state', 'file_name', 'size_bytes', 'created_at');
}

async function readUpload(db: Knex, id: string): Promise<Upload | undefined> {
	const row = await findRow(db, id);
	return row && uploadOf(id, row, 0);
}

function uploadOf(id: string, row: UploadRow, offset: number): Upload {
	return new Upload({
		id,
		size: row.size_bytes,
		offset,
		metadata: { filename: row.file_name },
		creation_date: row.created_at.toISOString()
	});
}
