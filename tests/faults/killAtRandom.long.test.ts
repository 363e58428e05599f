import { expect, it } from 'vitest';
import { killAtRandom } from './killAtRandom.ts';

it('stores each of twenty files once when a process is killed at a random moment of each', async () => {
	expect.hasAssertions();
	await killAtRandom(20, 7);
}, 3_000_000);
