import type { Knex } from 'knex';
import { z } from 'zod';
import type { Viewer } from '../access/viewer.ts';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import { notFound } from '../http/notFound.ts';
import { mailKindSchema, type MailKind } from './mailKinds.ts';
import { mailSettings } from './mailSettings.ts';
import { openLetter, type Letter } from './sealing.ts';

const SHOWN = 100;

export interface OutboxRow {
	id: string;
	kind: MailKind;
	to: string;
	subject: string;
	state: 'queued' | 'sent' | 'failed' | 'bounced';
	error: string | null;
	createdAt: string;
	/** can it still be read here */
	isKept: boolean;
}

const rowSchema = z.object({
	public_id: z.instanceof(Buffer),
	kind: mailKindSchema,
	to_email: z.string(),
	subject: z.string(),
	state: z.enum(['queued', 'sent', 'failed', 'bounced']),
	error: z.string().nullable(),
	created_at: z.date(),
	is_kept: z.number()
});

/**
 * Letters of an installation on which people try the product out: what would have gone to a mail server can be read here. Where
 * real people's letters go, nobody else reads them.
 *
 * @param isTrial is it a demo or a developer's own installation
 * @throws 404 for everybody but who runs the site, and everywhere else
 */
export async function listOutbox(db: Knex, viewer: Viewer, isTrial: boolean): Promise<OutboxRow[]> {
	checkMay(viewer, isTrial);
	const found: unknown = await db('mail_log')
		.orderBy('id', 'desc')
		.limit(SHOWN)
		.select(
			'public_id',
			'kind',
			'to_email',
			'subject',
			'state',
			'error',
			'created_at',
			db.raw('sealed IS NOT NULL AS is_kept')
		);
	return z
		.array(rowSchema)
		.parse(found)
		.map((row) => ({
			id: encodePublicId(row.public_id),
			kind: row.kind,
			to: row.to_email,
			subject: row.subject,
			state: row.state,
			error: row.error,
			createdAt: row.created_at.toISOString(),
			isKept: row.is_kept === 1
		}));
}

/** One letter of it. */
export async function readOutbox(
	db: Knex,
	viewer: Viewer,
	isTrial: boolean,
	id: string
): Promise<Letter & { to: string }> {
	checkMay(viewer, isTrial);
	const row = await db('mail_log')
		.where({ public_id: decodePublicId(id) ?? notFound() })
		.first<{ sealed: Buffer | null; to_email: string } | undefined>('sealed', 'to_email');
	const letter = row?.sealed && openLetter(row.sealed, mailSettings().secret);
	return letter ? { ...letter, to: row.to_email } : notFound();
}

function checkMay(viewer: Viewer, isTrial: boolean): void {
	if (!isTrial || !viewer.isOperator || mailSettings().smtpUrl !== null) notFound();
}
