import type { Knex } from 'knex';
import { decodePublicId } from './publicId.ts';

export interface AuditEntry {
	actorId: number | null;
	/** what was done, past tense, with underscores */
	action: string;
	subject?: { kind: string; id: string };
	detail?: Record<string, string | number | boolean | null>;
	address?: string | null;
}

/** Writes down who did what; the table only grows. */
export async function recordAudit(db: Knex | Knex.Transaction, entry: AuditEntry): Promise<void> {
	await db('audit_log').insert({
		actor_id: entry.actorId,
		action: entry.action,
		subject_kind: entry.subject?.kind ?? null,
		subject_id: entry.subject ? decodePublicId(entry.subject.id) : null,
		detail: JSON.stringify(entry.detail ?? {}),
		address: entry.address ?? null
	});
}
