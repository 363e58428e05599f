import type { Knex } from 'knex';

/** Deadlock, lock wait timeout; on a cluster a lost certification shows as a deadlock, a node that is not ready as 1047. */
const WORTH_ANOTHER_TRY = new Set(['ER_LOCK_DEADLOCK', 'ER_LOCK_WAIT_TIMEOUT', 'ER_UNKNOWN_COM_ERROR', 'ER_CHECKREAD']);
const TRIES = 6;
const FIRST_PAUSE_MS = 10;

/**
 * Runs one transaction, again from its start when the database gave up on it for another's sake. `work` must therefore have
 * no effect outside the transaction.
 *
 * @throws whatever `work` throws, and the last deadlock after six tries
 */
export async function retryOnDeadlock<T>(db: Knex, work: (trx: Knex.Transaction) => Promise<T>): Promise<T> {
	for (let attempt = 1; ; attempt++) {
		try {
			return await db.transaction(work);
		} catch (error) {
			if (attempt === TRIES || !(isDatabaseError(error) && WORTH_ANOTHER_TRY.has(error.code))) throw error;
			// A random part keeps two that collided from colliding again.
			const pauseMs = FIRST_PAUSE_MS * 2 ** (attempt - 1) * (0.5 + Math.random());
			await new Promise((resolve) => setTimeout(resolve, pauseMs));
		}
	}
}

/** An error that came from MariaDB or the way to it; `message` may hold a whole statement, so log `code` and `sqlMessage` only. */
export function isDatabaseError(
	error: unknown
): error is Error & { code: string; errno?: number; sqlMessage?: string } {
	return error instanceof Error && 'code' in error && typeof error.code === 'string';
}

/** Was a unique key already taken. */
export function isDuplicate(error: unknown): boolean {
	return isDatabaseError(error) && error.code === 'ER_DUP_ENTRY';
}
