import { inject } from 'vitest';

/**
 * Settings of the server under test; import it before anything of `$lib/server`. Each test run has a database and a folder of
 * raw files of its own.
 */
process.env.DATABASE_URL = inject('databaseUrl');
process.env.AUTH_SECRET = 'a secret for tests, of more than 32 characters';
process.env.ORIGIN = 'http://localhost';
process.env.KERBNOTE_STORAGE = `var/test/storage-${process.pid}`;
process.env.KERBNOTE_LOG_LEVEL ??= 'fatal';
