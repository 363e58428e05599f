import type { Knex } from 'knex';

/** Letters of an outbox can be read for this long, and used links are remembered. */
const KEPT_DAYS = 30;
/** Of a letter that went out, who got it when and whether it came back is kept this long. */
const LOGGED_DAYS = 365;
const AT_ONCE = 10_000;

/** Forgets what letters said, and links that ran out. */
export async function sweepMail(db: Knex): Promise<void> {
	const before = (days: number) => db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? DAY', [days]);
	await db('mail_log')
		.where('created_at', '<', before(KEPT_DAYS))
		.whereNotNull('sealed')
		.limit(AT_ONCE)
		.update({ sealed: null });
	await db('mail_log').where('created_at', '<', before(LOGGED_DAYS)).limit(AT_ONCE).delete();
	await db('password_resets').where('expires_at', '<', before(KEPT_DAYS)).limit(AT_ONCE).delete();
}
