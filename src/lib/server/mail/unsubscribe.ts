import { createHmac, hkdfSync, timingSafeEqual } from 'node:crypto';
import type { Knex } from 'knex';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import { mailSettings } from './mailSettings.ts';
import { OPTIONAL_KINDS, optionalKindSchema, type MailKind, type OptionalKind } from './mailKinds.ts';

/** Who asks for an end of which letters: signed, not stored, and good for nothing else. It never runs out, like the letter itself. */
export function unsubscribeToken(personPublicId: Buffer, kind: OptionalKind): string {
	const said = `${encodePublicId(personPublicId)}.${kind}`;
	return `${said}.${sign(said)}`;
}

function sign(text: string): string {
	const key = Buffer.from(hkdfSync('sha256', mailSettings().secret, '', 'kerbnote unsubscribe', 32));
	return createHmac('sha256', key).update(text).digest('base64url');
}

/** The person and the kind that a token speaks of; null for one that was not signed here, or whose person is gone. */
export async function readUnsubscribeToken(
	db: Knex,
	token: string
): Promise<{ personId: number; kind: OptionalKind; isWanted: boolean } | null> {
	const [id, kindText, signature, ...more] = token.split('.');
	if (more.length > 0 || signature === undefined) return null;
	const [given, right] = [Buffer.from(signature), Buffer.from(sign(`${id}.${kindText}`))];
	if (given.length !== right.length || !timingSafeEqual(given, right)) return null;
	const kind = optionalKindSchema.safeParse(kindText);
	const publicId = decodePublicId(id);
	if (!kind.success || !publicId) return null;
	const person = await db('people').where({ public_id: publicId }).first<{ id: number } | undefined>('id');
	if (!person) return null;
	return { personId: person.id, kind: kind.data, isWanted: await wants(db, person.id, kind.data) };
}

/** Writes down what a person wants to get. */
export async function chooseMail(
	db: Knex | Knex.Transaction,
	personId: number,
	kind: OptionalKind,
	isWanted: boolean
): Promise<void> {
	await db('mail_choices')
		.insert({ person_id: personId, kind, is_wanted: isWanted })
		.onConflict(['person_id', 'kind'])
		.merge(['is_wanted']);
}

/** Does a person get letters of this kind. */
export async function wants(db: Knex | Knex.Transaction, personId: number, kind: MailKind): Promise<boolean> {
	const optional = optionalKindSchema.safeParse(kind);
	if (!optional.success) return true;
	const chosen = await db('mail_choices')
		.where({ person_id: personId, kind: optional.data })
		.first<{ is_wanted: number } | undefined>('is_wanted');
	return chosen ? chosen.is_wanted === 1 : OPTIONAL_KINDS[optional.data].unlessChosen;
}
