import { expect, it } from 'vitest';
import { killAtRandom } from './killAtRandom.ts';

it('stores each file once when server, worker and MariaDB are killed at random moments', async () => {
	expect.hasAssertions();
	await killAtRandom(3, 20261201);
}, 400_000);
