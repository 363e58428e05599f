import { createCipheriv, createDecipheriv, hkdfSync, randomBytes } from 'node:crypto';
import { z } from 'zod';

/** A letter as it stands in the log until it is sent: its links open accounts, so the table alone must not show them. */
export const letterSchema = z.object({
	subject: z.string(),
	html: z.string(),
	text: z.string(),
	/** address that ends letters of this kind; null where they cannot be ended */
	unsubscribeUrl: z.string().nullable()
});
export type Letter = z.infer<typeof letterSchema>;

const CIPHER = 'aes-256-gcm';
const NONCE_BYTES = 12;
const TAG_BYTES = 16;

const keyOf = (secret: string): Buffer => Buffer.from(hkdfSync('sha256', secret, '', 'kerbnote mail log', 32));

/** Nonce, tag, then the letter encrypted by a key that is drawn from the installation's secret. */
export function sealLetter(letter: Letter, secret: string): Buffer {
	const nonce = randomBytes(NONCE_BYTES);
	const cipher = createCipheriv(CIPHER, keyOf(secret), nonce);
	const body = Buffer.concat([cipher.update(JSON.stringify(letter), 'utf8'), cipher.final()]);
	return Buffer.concat([nonce, cipher.getAuthTag(), body]);
}

/** The letter, or null when it was sealed by another secret or changed since. */
export function openLetter(sealed: Buffer, secret: string): Letter | null {
	const nonce = sealed.subarray(0, NONCE_BYTES);
	const tag = sealed.subarray(NONCE_BYTES, NONCE_BYTES + TAG_BYTES);
	try {
		const decipher = createDecipheriv(CIPHER, keyOf(secret), nonce, { authTagLength: TAG_BYTES });
		decipher.setAuthTag(tag);
		const text = Buffer.concat([decipher.update(sealed.subarray(NONCE_BYTES + TAG_BYTES)), decipher.final()]);
		return letterSchema.parse(JSON.parse(text.toString('utf8')));
	} catch {
		// A changed secret makes old letters unreadable, which is what it is changed for.
		return null;
	}
}
