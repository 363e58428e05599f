import { database } from './database.ts';
import { migrations } from './migrations.ts';

const PATIENCE_MS = 2_000;

/** Does the database answer, and does it have every schema step. */
export async function isReady(): Promise<boolean> {
	const [newest] = migrations[migrations.length - 1];
	try {
		const row = await database()('knex_migrations')
			.where({ name: newest })
			.timeout(PATIENCE_MS)
			.first<{ id: number } | undefined>('id');
		return row !== undefined;
	} catch {
		return false;
	}
}
