import { expect, it } from 'vitest';
import { readDamaged } from './testing/readDamaged.ts';

it('ends in runs or a known refusal for ten thousand damaged files', { timeout: 3_600_000 }, () => {
	const before = process.memoryUsage().rss;
	const wrong = Array.from({ length: 10_000 }, (_, i) => readDamaged(1000 + i)).filter((one) => one !== null);
	expect(wrong).toEqual([]);
	expect(process.memoryUsage().rss - before).toBeLessThan(512e6);
});
