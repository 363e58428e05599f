import pino from 'pino';

/**
 * One line of JSON for each event. Traces, passwords, tokens, cookies and statements are never handed to it: errors go through
 * `faultOf`, which keeps what helps and leaves out what a statement or a body may carry.
 */
export const logger = pino({ level: process.env.KERBNOTE_LOG_LEVEL ?? 'info', base: undefined });

/** What may be logged of an error. A database error's own message can hold the whole statement, so its `sqlMessage` stands in. */
export function faultOf(error: unknown): Record<string, unknown> {
	if (!(error instanceof Error)) return { fault: typeof error };
	const code = 'code' in error && typeof error.code === 'string' ? error.code : undefined;
	const isStatement = 'sql' in error;
	const sqlMessage = 'sqlMessage' in error && typeof error.sqlMessage === 'string' ? error.sqlMessage : undefined;
	return {
		fault: error.name,
		code,
		message: isStatement ? sqlMessage?.slice(0, 300) : error.message.slice(0, 500),
		stack: isStatement ? undefined : error.stack?.split('\n').slice(1, 8).join('\n'),
		cause: error.cause instanceof Error ? faultOf(error.cause) : undefined
	};
}
