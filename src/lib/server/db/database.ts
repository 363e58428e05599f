import knex, { type Knex } from 'knex';
import { environment } from '../environment.ts';
import { migrationSource } from './migrations.ts';

/** How Knex reaches MariaDB: UTC, milliseconds, four-byte characters, numbers up to 2^53 as numbers. */
export function databaseConfig(url: string, poolSize = 10): Knex.Config {
	const parts = new URL(url);
	return {
		client: 'mysql2',
		connection: {
			host: parts.hostname,
			port: Number(parts.port || 3306),
			user: decodeURIComponent(parts.username),
			password: decodeURIComponent(parts.password),
			database: parts.pathname.slice(1),
			charset: 'utf8mb4',
			timezone: 'Z',
			supportBigNumbers: true,
			bigNumberStrings: false,
			connectTimeout: 5000
		},
		pool: {
			min: 0,
			max: poolSize,
			// The server's own zone must not matter: CURRENT_TIMESTAMP(3) is written beside times from here.
			afterCreate: (connection: ConnectionWithQuery, done: (error: Error | null, connection: unknown) => void) =>
				connection.query("SET time_zone = '+00:00'", (error) => done(error, connection))
		},
		acquireConnectionTimeout: 10_000,
		migrations: { migrationSource }
	};
}

interface ConnectionWithQuery {
	query(sql: string, done: (error: Error | null) => void): void;
}

let shared: Knex | undefined;

/** The pool of this process. */
export function database(): Knex {
	return (shared ??= knex(databaseConfig(environment().DATABASE_URL, environment().KERBNOTE_POOL_SIZE)));
}

/** Closes the pool, so that the process can end. */
export async function closeDatabase(): Promise<void> {
	const closing = shared;
	shared = undefined;
	await closing?.destroy();
}
