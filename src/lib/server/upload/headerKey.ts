import { createHash } from 'node:crypto';

/**
 * By what files of one kind are known again: the words of their header, without case, accents' spelling and spaces, in order.
 *
 * @returns SHA-256
 */
export function headerKey(headers: readonly string[]): Buffer {
	const words = headers.map((header) => header.normalize('NFKC').toLowerCase().replaceAll(/\s+/gu, ' ').trim());
	return createHash('sha256').update(JSON.stringify(words)).digest();
}
