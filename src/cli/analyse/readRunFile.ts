import { open, type FileHandle } from 'node:fs/promises';
import { basename } from 'node:path';
import { Readable } from 'node:stream';
import { createGunzip } from 'node:zlib';
import { readRun, type RawRun } from '../../lib/parse/index.ts';
import { KerbnoteError } from '../../lib/schemas/kerbnoteError.ts';
import { readChunks } from './readChunks.ts';

const CHUNK_BYTES = 1 << 20;
const GZIP_MAGIC = [0x1f, 0x8b];

/**
 * Reads a file's runs, unpacking gzip by its first bytes, whatever the file is called.
 *
 * @throws {KerbnoteError} `file_not_found`, `compressed_file` where the gzip is broken, and what the parser refuses
 */
export async function readRunFile(path: string): Promise<RawRun[]> {
	return withBytes(path, (bytes, fileName, sizeBytes) => readRun(bytes, { fileName, sizeBytes }));
}

/**
 * Opens a file for as long as its bytes are read, gzip unpacked.
 *
 * @throws {KerbnoteError} `file_not_found`, `compressed_file` where the gzip is broken
 */
export async function withBytes<Read>(
	path: string,
	read: (bytes: AsyncIterable<Uint8Array>, fileName: string, sizeBytes?: number) => Promise<Read>
): Promise<Read> {
	const handle = await openFile(path);
	try {
		const magic = Buffer.alloc(GZIP_MAGIC.length);
		const { bytesRead } = await handle.read(magic, 0, magic.length, 0);
		const packed = bytesRead === magic.length && GZIP_MAGIC.every((byte, i) => magic[i] === byte);
		const fileName = basename(path);
		if (!packed) return await read(readChunks(handle), fileName, (await handle.stat()).size);
		const bytes = handle.createReadStream({ start: 0, highWaterMark: CHUNK_BYTES, autoClose: false });
		return await read(gunzipped(bytes, fileName), fileName);
	} finally {
		await handle.close();
	}
}

async function openFile(path: string): Promise<FileHandle> {
	const handle = await open(path, 'r').catch((cause: unknown) => {
		throw new KerbnoteError(
			'file_not_found',
			`analyse requires a file that can be read, got ${path}`,
			'Check the name and the permissions of the file.',
			{},
			{ cause }
		);
	});
	if ((await handle.stat()).isFile()) return handle;
	await handle.close();
	throw new KerbnoteError(
		'file_not_found',
		`analyse requires a file, got the folder or device ${path}`,
		'Name a file.'
	);
}

async function* gunzipped(bytes: Readable, fileName: string): AsyncGenerator<Uint8Array> {
	const gunzip = createGunzip({ chunkSize: CHUNK_BYTES });
	bytes.on('error', (error) => gunzip.destroy(error));
	try {
		for await (const chunk of bytes.pipe(gunzip)) yield chunk;
	} catch (cause) {
		if (cause instanceof KerbnoteError) throw cause;
		throw new KerbnoteError(
			'compressed_file',
			`${fileName} is packed with gzip, but cannot be unpacked`,
			'Pack it again, or hand over the unpacked file.',
			{},
			{ cause }
		);
	}
}
