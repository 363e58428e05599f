import type { Knex } from 'knex';
import { createTransport, type Transporter } from 'nodemailer';
import { encodePublicId } from '../db/publicId.ts';
import { finish, holdJob, type ClaimedJob } from '../jobs/jobQueue.ts';
import { mailSettings, type MailSettings } from './mailSettings.ts';
import { openLetter, type Letter } from './sealing.ts';

/** A server that does not speak for so long is tried again later; a worker waits no longer. */
const CONNECT_MS = 10_000;
const SILENCE_MS = 30_000;
/** SMTP: an answer of 500 and above is final (RFC 5321, 4.2.1). */
const FINAL_FROM = 500;

interface MailRow {
	id: number;
	public_id: Buffer;
	to_email: string;
	state: string;
	sealed: Buffer | null;
}

/** The mail server did not take a letter; `isFinal` when it never will. */
export class MailRefused extends Error {
	readonly code: string;
	constructor(
		message: string,
		readonly isFinal: boolean
	) {
		super(message);
		this.name = 'MailRefused';
		this.code = isFinal ? 'mail_bounced' : 'mail_not_sent';
	}
}

/**
 * Sends one letter of the log. A server that refuses for good is written down as a bounce; anything else is tried again by the
 * queue. A worker that dies between the server's answer and ours sends twice, with the same Message-ID.
 *
 * @throws {MailRefused} when the server did not take it now
 */
export async function sendMail(db: Knex, job: ClaimedJob, { mailId }: { mailId: number }): Promise<void> {
	const row = await db('mail_log')
		.where({ id: mailId })
		.first<MailRow | undefined>('id', 'public_id', 'to_email', 'state', 'sealed');
	if (!row || row.state !== 'queued') return await finish(db, job);
	const settings = mailSettings();
	const letter = row.sealed && openLetter(row.sealed, settings.secret);
	if (!letter || settings.smtpUrl === null) {
		const error = letter
			? 'no mail server is configured'
			: 'the letter cannot be read: the secret of the site has changed';
		return await settle(db, job, row.id, { state: 'failed', error });
	}
	try {
		await deliver(settings, settings.smtpUrl, row, letter);
	} catch (fault) {
		const refusal = refusalOf(fault);
		if (refusal.isFinal) return await settle(db, job, row.id, { state: 'bounced', error: refusal.message });
		const isLast = job.attempt >= job.maxAttempts;
		await db('mail_log')
			.where({ id: row.id })
			.update({
				attempts: job.attempt,
				error: refusal.message,
				...(isLast && { state: 'failed', sealed: null })
			});
		throw refusal;
	}
	await settle(db, job, row.id, { state: 'sent', error: null });
}

/** Writes down how it ended, and forgets the letter, in one transaction with the job. */
async function settle(
	db: Knex,
	job: ClaimedJob,
	id: number,
	outcome: { state: 'sent' | 'failed' | 'bounced'; error: string | null }
): Promise<void> {
	await db.transaction(async (trx) => {
		await holdJob(trx, job);
		await trx('mail_log')
			.where({ id })
			.update({
				...outcome,
				sealed: null,
				attempts: job.attempt,
				...(outcome.state === 'sent' && { sent_at: trx.raw('CURRENT_TIMESTAMP(3)') })
			});
		await finish(trx, job);
	});
}

let shared: { url: string; transport: Transporter } | undefined;

function transportTo(url: string): Transporter {
	if (shared?.url === url) return shared.transport;
	shared?.transport.close();
	const { hostname, username } = new URL(url);
	const isHere = ['localhost', '127.0.0.1', '[::1]'].includes(hostname);
	const transport = createTransport({
		url,
		// A password never crosses a network in the clear.
		requireTLS: username !== '' && !isHere,
		connectionTimeout: CONNECT_MS,
		greetingTimeout: CONNECT_MS,
		socketTimeout: SILENCE_MS,
		disableFileAccess: true,
		disableUrlAccess: true
	});
	shared = { url, transport };
	return transport;
}

async function deliver(settings: MailSettings, url: string, row: MailRow, letter: Letter): Promise<void> {
	await transportTo(url).sendMail({
		from: settings.from,
		to: { name: '', address: row.to_email },
		subject: letter.subject,
		text: letter.text,
		html: letter.html,
		messageId: `<${encodePublicId(row.public_id)}@${new URL(settings.origin).hostname}>`,
		// Answers of machines to machines would go round for ever (RFC 3834).
		headers: { 'Auto-Submitted': 'auto-generated', 'X-Auto-Response-Suppress': 'All' },
		...(letter.unsubscribeUrl && {
			// One click by the mail program itself (RFC 8058).
			list: { unsubscribe: { url: letter.unsubscribeUrl, comment: 'no more letters of this kind' } },
			headers: {
				'Auto-Submitted': 'auto-generated',
				'X-Auto-Response-Suppress': 'All',
				'List-Unsubscribe-Post': 'List-Unsubscribe=One-Click'
			}
		})
	});
}

/** What the server said, without the letter: addresses and answers, never a body or a link. */
function refusalOf(fault: unknown): MailRefused {
	if (!(fault instanceof Error)) return new MailRefused('the mail server could not be spoken to', false);
	const code = 'responseCode' in fault && typeof fault.responseCode === 'number' ? fault.responseCode : null;
	const said = 'response' in fault && typeof fault.response === 'string' ? fault.response : fault.message;
	// A refused sign-in or sender is our own fault, and a person puts it right: the letter waits.
	const isAboutReader = 'command' in fault && (fault.command === 'RCPT TO' || fault.command === 'DATA');
	const isFinal = code !== null && code >= FINAL_FROM && isAboutReader;
	return new MailRefused(said.replaceAll(/[\p{Cc}\s]+/gu, ' ').slice(0, 400), isFinal);
}
