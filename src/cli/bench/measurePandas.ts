import { spawnSync } from 'node:child_process';
import { z } from 'zod';

/** Best of three, without the imports. */
const SCRIPT = `
import sys, time
import numpy, pandas
best = 1e9
for _ in range(3):
    begun = time.perf_counter()
    pandas.read_csv(sys.argv[1], dtype=numpy.float32, engine="c")
    best = min(best, time.perf_counter() - begun)
print(best)
`;

/** Seconds that pandas takes to read a file into columns; null where the machine has none. */
export function measurePandas(path: string): number | null {
	const { status, stdout } = spawnSync('python3', ['-c', SCRIPT, path], { encoding: 'utf8' });
	if (status !== 0) return null;
	return z.coerce.number().positive().parse(stdout.trim());
}
