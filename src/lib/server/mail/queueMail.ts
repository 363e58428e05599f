import type { Knex } from 'knex';
import { encodePublicId, newPublicId } from '../db/publicId.ts';
import { enqueue } from '../jobs/jobQueue.ts';
import { mailSettings } from './mailSettings.ts';
import { mailToSchema, optionalKindSchema, type MailInput, type MailKind } from './mailKinds.ts';
import { sealLetter } from './sealing.ts';
import { renderLetter } from './templates/renderLetter.ts';
import { unsubscribeToken, wants } from './unsubscribe.ts';

/** The pause grows fourfold from a second: the last try comes about six hours after the first. */
const MAX_ATTEMPTS = 9;

interface Reader {
	personId: number | null;
	publicId: Buffer | null;
	email: string;
	name: string | null;
}

/**
 * Writes a letter and puts it in the log and, where a mail server is configured, in the queue. Call it in the transaction of what
 * the letter tells of: with that it stands or falls.
 *
 * Letters to a minor without an address of their own go to their guardians. Nothing is written to a closed account, to somebody
 * who switched the kind off, nor to an address that has none.
 *
 * @returns ids in the log, one for each reader; empty when nobody wants or can get it
 * @throws {ZodError} when the data are not those of the kind: a bug of the caller
 */
export async function queueMail(trx: Knex | Knex.Transaction, input: MailInput): Promise<string[]> {
	const { smtpUrl, origin, secret } = mailSettings();
	const ids: string[] = [];
	for (const reader of await findReaders(trx, input.to, input.kind)) {
		const optional = optionalKindSchema.safeParse(input.kind);
		const unsubscribeUrl =
			optional.success && reader.publicId
				? `${origin}/unsubscribe/${unsubscribeToken(reader.publicId, optional.data)}`
				: null;
		const letter = renderLetter(input, { origin, readerName: reader.name, unsubscribeUrl });
		const publicId = newPublicId();
		const [id]: number[] = await trx('mail_log').insert({
			public_id: publicId,
			kind: input.kind,
			to_email: reader.email,
			to_person_id: reader.personId,
			subject: letter.subject,
			sealed: sealLetter(letter, secret),
			is_outbox_only: smtpUrl === null
		});
		// Only the number: a job's payload is read by whoever looks after the queue.
		if (smtpUrl !== null) {
			await enqueue(trx, 'sendMail', { mailId: id }, { uniqueKey: `mail-${id}`, maxAttempts: MAX_ATTEMPTS });
		}
		ids.push(encodePublicId(publicId));
	}
	return ids;
}

async function findReaders(trx: Knex | Knex.Transaction, input: MailInput['to'], kind: MailKind): Promise<Reader[]> {
	const to = mailToSchema.parse(input);
	if ('email' in to) return [{ personId: null, publicId: null, email: to.email, name: to.name ?? null }];
	const person = await findPerson(trx, to.personId);
	if (!person) return [];
	const people = person.email === null ? await findGuardians(trx, to.personId) : [person];
	const readers: Reader[] = [];
	for (const { id, public_id, email, name } of people) {
		if (email === null || !(await wants(trx, id, kind))) continue;
		readers.push({ personId: id, publicId: public_id, email, name });
	}
	return readers;
}

interface PersonRow {
	id: number;
	public_id: Buffer;
	email: string | null;
	name: string;
}
const COLUMNS = ['people.id', 'people.public_id', 'people.email', 'people.name'];

async function findPerson(trx: Knex | Knex.Transaction, id: number): Promise<PersonRow | undefined> {
	return await trx('people')
		.where({ id })
		.whereNull('disabled_at')
		.first<PersonRow | undefined>(...COLUMNS);
}

async function findGuardians(trx: Knex | Knex.Transaction, minorId: number): Promise<PersonRow[]> {
	return await trx('guardian_links')
		.join('people', 'people.id', 'guardian_links.guardian_id')
		.where({ minor_id: minorId })
		.whereNull('guardian_links.ended_at')
		.whereNull('people.disabled_at')
		.select<PersonRow[]>(...COLUMNS);
}
