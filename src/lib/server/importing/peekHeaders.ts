import { RunReader } from '../../parse/runReader.ts';
import { KerbnoteError } from '../../schemas/kerbnoteError.ts';

/** Past any usual preamble, and hundreds of rows. */
const PEEK_BYTES = 1 << 18;
/** As many columns as a question shows; the words of so many tell one kind of file from another. */
const MOST_HEADERS = 200;

/**
 * The header of a table by its first bytes.
 *
 * @returns null where they are no table that could be read or asked about
 */
export async function peekHeaders(bytes: AsyncIterable<Uint8Array>, fileName: string): Promise<string[] | null> {
	const reader = new RunReader({ fileName });
	let left = PEEK_BYTES;
	try {
		for await (const chunk of bytes) {
			reader.push(chunk.subarray(0, left));
			left -= chunk.length;
			if (left <= 0) break;
		}
		return headersOf(reader.end()[0].source.columns);
	} catch (error) {
		if (!(error instanceof KerbnoteError)) throw error;
		return error.question ? headersOf(error.question.columns) : null;
	}
}

/** Those headers by which files of one kind are known again. */
export function headersOf(columns: readonly { header: string }[]): string[] {
	return columns.slice(0, MOST_HEADERS).map(({ header }) => header);
}
