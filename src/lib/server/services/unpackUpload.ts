import { createHash } from 'node:crypto';
import type { Knex } from 'knex';
import { KerbnoteError } from '../../schemas/kerbnoteError.ts';
import { encodePublicId } from '../db/publicId.ts';
import type { StoredArchiveFile } from '../db/uploadRepository.ts';
import { environment } from '../environment.ts';
import { readArchive, type ArchiveTable } from '../importing/archive/readArchive.ts';
import { FileTooLarge, type KeptFile, type RawStore } from '../storage/rawStore.ts';
import { storageKeyOf } from '../storage/store.ts';
import { cleanName } from '../upload/receiveUpload.ts';
import { settleInTransaction } from '../upload/settleReceived.ts';
import type { ImportedUpload, Settle } from './importRun.ts';

interface UnpackedTable {
	id: number;
	publicId: Buffer;
	storageKey: string;
	name: string;
	kept: KeptFile;
}

/**
 * Makes an upload of each table in a zip. All of them count with one transaction, in which the archive is done; until then they are
 * "receiving", and a refused archive leaves none. Their ids follow from the archive's, so that a second try after a crash finds
 * what the first has left.
 */
export async function unpackUpload(
	db: Knex,
	store: RawStore,
	archive: ImportedUpload,
	path: string,
	settle: Settle
): Promise<void> {
	const tables: UnpackedTable[] = [];
	let names: { name: string; isTable: boolean }[];
	try {
		names = await readArchive(path, async (table) => {
			tables.push(await keepTable(db, store, archive, table));
		});
	} catch (error) {
		await removeTables(db, store, archive);
		const refusal = refusalOf(error);
		return await settle(async (trx) => {
			await trx('uploads')
				.where({ id: archive.id })
				.update({ kind: 'archive', state: 'refused', stage: 'done', progress: 1, error: JSON.stringify(refusal) });
		});
	}
	const doubles: string[] = [];
	await settle(async (trx) => {
		doubles.length = 0;
		const files: StoredArchiveFile[] = [];
		const left = [...tables];
		for (const { name, isTable } of names) {
			const table = isTable ? left.shift() : undefined;
			if (!table) {
				files.push({ name, upload: null, knownBefore: false });
				continue;
			}
			const received = { ...table, ownerId: archive.owner_id };
			const earlier = await settleInTransaction(trx, received, table.kept);
			if (earlier) doubles.push(table.storageKey);
			files.push({ name, upload: encodePublicId(earlier ?? table.publicId), knownBefore: earlier !== null });
		}
		await trx('uploads')
			.where({ id: archive.id })
			.update({
				kind: 'archive',
				state: 'analysed',
				stage: 'done',
				progress: 1,
				error: null,
				archive_files: JSON.stringify(files)
			});
	});
	for (const key of doubles) await store.remove(key);
}

async function keepTable(
	db: Knex,
	store: RawStore,
	archive: ImportedUpload,
	table: ArchiveTable
): Promise<UnpackedTable> {
	const publicId = createHash('sha256').update(archive.public_id).update(String(table.index)).digest().subarray(0, 16);
	const storageKey = storageKeyOf(encodePublicId(publicId));
	await db('uploads')
		.insert({
			public_id: publicId,
			owner_id: archive.owner_id,
			uploaded_by: archive.uploaded_by,
			parent_id: archive.id,
			file_name: cleanName(table.name),
			storage_key: storageKey,
			state: 'receiving'
		})
		.onConflict('public_id')
		.ignore();
	const row = await db('uploads').where({ public_id: publicId }).first<{ id: number } | undefined>('id');
	if (!row) throw new Error('an unpacked table requires its row');
	const kept = await store.write(storageKey, table.open(), environment().KERBNOTE_UPLOAD_LIMIT_BYTES);
	return { id: row.id, publicId, storageKey, name: table.name, kept };
}

/** What was unpacked before the archive turned out to be refused. */
async function removeTables(db: Knex, store: RawStore, archive: ImportedUpload): Promise<void> {
	const rows = await db('uploads')
		.where({ parent_id: archive.id, state: 'receiving' })
		.select<{ id: number; storage_key: string }[]>('id', 'storage_key');
	for (const { id, storage_key } of rows) {
		await db('uploads').where({ id, state: 'receiving' }).delete();
		await store.remove(storage_key);
	}
}

/** @throws what is not the file's fault */
function refusalOf(error: unknown) {
	if (error instanceof KerbnoteError) return error.toDocument().error;
	if (!(error instanceof FileTooLarge)) throw error;
	const limitMb = Math.floor(error.limitBytes / 1024 / 1024);
	return new KerbnoteError(
		'file_too_large',
		`a file of the archive requires at most ${limitMb} MB unpacked`,
		'Cut the recording into runs'
	).toDocument().error;
}
