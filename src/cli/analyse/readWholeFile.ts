import { KerbnoteError } from '../../lib/schemas/kerbnoteError.ts';
import { withBytes } from './readRunFile.ts';

/** A sweep of an hour at 1 kHz is a third of this. */
const MOST_BYTES = 256 << 20;

/**
 * Reads a file that is a small table, gzip unpacked.
 *
 * @throws {KerbnoteError} `file_not_found`, `compressed_file`, `file_too_large`
 */
export function readWholeFile(path: string): Promise<Uint8Array> {
	return withBytes(path, async (bytes, fileName) => {
		const chunks: Uint8Array[] = [];
		let size = 0;
		for await (const chunk of bytes) {
			size += chunk.length;
			if (size > MOST_BYTES)
				throw new KerbnoteError('file_too_large', `${fileName} is larger than 256 MiB`, 'Export only the table itself');
			chunks.push(chunk);
		}
		return Buffer.concat(chunks);
	});
}
