import { randomBytes } from 'node:crypto';

/** Crockford's base 32, lower case: no i, l, o, u, so that an id can be read aloud. */
const DIGITS = '0123456789abcdefghjkmnpqrstvwxyz';
const LENGTH = 26;
const BYTES = 16;

/** 128 random bits, as the column keeps them. */
export function newPublicId(): Buffer {
	return randomBytes(BYTES);
}

/** The 26 characters that URLs carry. */
export function encodePublicId(id: Uint8Array): string {
	if (id.length !== BYTES) throw new RangeError(`encodePublicId requires ${BYTES} bytes, got ${id.length}`);
	let value = 0n;
	for (const byte of id) value = (value << 8n) | BigInt(byte);
	let text = '';
	for (let i = 0; i < LENGTH; i++) {
		text = DIGITS[Number(value & 31n)] + text;
		value >>= 5n;
	}
	return text;
}

/** The column's bytes, or null when the text is no id (which then reads like an id that nobody has). */
export function decodePublicId(text: string): Buffer | null {
	if (text.length !== LENGTH) return null;
	let value = 0n;
	for (const digit of text) {
		const at = DIGITS.indexOf(digit);
		if (at < 0) return null;
		value = (value << 5n) | BigInt(at);
	}
	if (value >> 128n !== 0n) return null;
	const id = Buffer.alloc(BYTES);
	for (let i = BYTES - 1; i >= 0; i--) {
		id[i] = Number(value & 255n);
		value >>= 8n;
	}
	return id;
}
