import { randomBytes } from 'node:crypto';
import { ERRORS, type Lock, type Locker, type RequestRelease } from '@tus/server';
import type { Knex } from 'knex';
import { faultOf, logger } from '../../logger.ts';

/** Who holds a lock says this often that it lives … */
const BEAT_MS = 1_000;
/** … and loses it after this long without a word. */
const LOST_AFTER_MS = 6_000;
const ASK_EVERY_MS = 80;
/** Longer than a holder needs that is asked to let go, or that is gone. */
const PATIENCE_MS = 15_000;

/**
 * Locks that all nodes share: a row with an expiry, so that the lock of a node that was killed runs out. Not GET_LOCK, which is
 * bound to one connection and does not hold across a cluster.
 *
 * Who waits asks the holder to let go: a phone that lost its connection comes back before the server knows that the first
 * request is dead.
 */
export class SharedLocker implements Locker {
	constructor(private readonly db: Knex) {}

	newLock(id: string): Lock {
		return new SharedLock(this.db, `upload:${id}`);
	}
}

class SharedLock implements Lock {
	readonly #holder = randomBytes(12).toString('hex');
	#timer: NodeJS.Timeout | undefined;

	constructor(
		private readonly db: Knex,
		private readonly name: string
	) {}

	async lock(signal: AbortSignal, requestRelease: RequestRelease): Promise<void> {
		const until = Date.now() + PATIENCE_MS;
		while (!(await this.#take())) {
			if (signal.aborted || Date.now() > until) throw ERRORS.ERR_LOCK_TIMEOUT;
			await this.db('locks').where({ name: this.name }).update({ release_asked: true });
			await new Promise((resolve) => setTimeout(resolve, ASK_EVERY_MS));
		}
		this.#timer = setInterval(() => void this.#beat(requestRelease), BEAT_MS);
		this.#timer.unref();
	}

	async unlock(): Promise<void> {
		clearInterval(this.#timer);
		await this.db('locks').where({ name: this.name, holder: this.#holder }).delete();
	}

	/** One statement, so that of two who come at once the database lets one in. */
	async #take(): Promise<boolean> {
		const expiry = 'CURRENT_TIMESTAMP(3) + INTERVAL ? MICROSECOND';
		await this.db.raw(
			`INSERT INTO locks (name, holder, expires_at) VALUES (?, ?, ${expiry})
			ON DUPLICATE KEY UPDATE
				holder = IF(expires_at < CURRENT_TIMESTAMP(3), VALUES(holder), holder),
				release_asked = IF(holder = VALUES(holder), FALSE, release_asked),
				expires_at = IF(holder = VALUES(holder), VALUES(expires_at), expires_at)`,
			[this.name, this.#holder, LOST_AFTER_MS * 1000]
		);
		const row = await this.db('locks').where({ name: this.name }).first<{ holder: string } | undefined>('holder');
		return row?.holder === this.#holder;
	}

	async #beat(requestRelease: RequestRelease): Promise<void> {
		try {
			const held = await this.db('locks')
				.where({ name: this.name, holder: this.#holder })
				.update({ expires_at: this.db.raw('CURRENT_TIMESTAMP(3) + INTERVAL ? MICROSECOND', [LOST_AFTER_MS * 1000]) });
			const row = await this.db('locks')
				.where({ name: this.name })
				.first<{ holder: string; release_asked: number } | undefined>('holder', 'release_asked');
			const isMine = held === 1 && row?.holder === this.#holder;
			if (!isMine || row.release_asked === 1) await requestRelease();
		} catch (error) {
			// A database that is away: the lock runs out, and whoever comes next finds out how far the file is.
			logger.warn(faultOf(error), 'a lock could not be kept');
		}
	}
}
