import { randomUUID } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';

/** A file as `setInputFiles` takes it. */
export interface HandedFile {
	name: string;
	mimeType: string;
	buffer: Buffer;
}

/** The text of a packed fixture. */
export function fixtureText(path: string): string {
	return gunzipSync(readFileSync(path)).toString('utf8');
}

/**
 * A table of laps as a file of its own: the same bytes a second time would be known, and each journey runs on a desktop and on a
 * phone.
 *
 * @param paddingChars of a column that nobody needs, in each row: for files that take a while
 */
export function lapFile(name: string, text: string, { paddingChars = 0 } = {}): HandedFile {
	const [header, ...rows] = text.trimEnd().split('\n');
	const own = randomUUID();
	const padding = 'x'.repeat(paddingChars);
	const padded = [`${header},note ${own}`, ...rows.map((row) => `${row},${padding}`)].join('\n');
	return { name, mimeType: 'text/csv', buffer: Buffer.from(`${padded}\n`) };
}
