import type { Connection } from 'mysql2';
import type { Knex } from 'knex';

/**
 * Runs a statement by MariaDB's binary protocol on the transaction's connection. Knex would write a blob as hexadecimal text
 * into the statement: twice the bytes, six times the time, and a ceiling at half of max_allowed_packet.
 */
export async function executePrepared(
	trx: Knex.Transaction,
	sql: string,
	values: (string | number | Uint8Array | null)[]
): Promise<void> {
	const connection: Connection = await trx.client.acquireConnection();
	await new Promise<void>((resolve, reject) => {
		connection.execute(sql, values, (error) => (error ? reject(error) : resolve()));
	});
}
