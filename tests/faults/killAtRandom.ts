import { readFile } from 'node:fs/promises';
import { setTimeout as sleep } from 'node:timers/promises';
import { gunzipSync } from 'node:zlib';
import { expect } from 'vitest';
import { Drill, type Victim } from './drill.ts';

/** Upload and analysis of one file fit in here on a machine with nothing else to do. */
const WINDOW_MS = 5_000;
const VICTIMS: readonly Victim[] = ['server', 'worker', 'mariadb'];

/**
 * Hands files over one after another, and kills one of the processes at a random moment of each; afterwards everything is there
 * once, and nothing else.
 *
 * @param kills as many files are handed over
 * @param seed of the moments and of who is killed; the same seed kills the same at the same times
 */
export async function killAtRandom(kills: number, seed: number): Promise<void> {
	const random = generator(seed);
	const drill = new Drill();
	try {
		await drill.start();
		const text = gunzipSync(await readFile('fixtures/closed-form/marrow_fen_noise_60hz.csv.gz')).toString();
		const lines = text.trimEnd().split('\n');
		const offset = Math.floor(random() * VICTIMS.length);
		for (let i = 0; i < kills; i++) {
			const victim = VICTIMS[(i + offset) % VICTIMS.length];
			const bytes = Buffer.from(lines.slice(0, lines.length - i).join('\n') + '\n');
			const sent = drill.handOver(`${i}.csv`, bytes);
			await Promise.all([sent, sleep(random() * WINDOW_MS).then(() => drill.kill(victim))]);
		}
		await drill.settled();
		expect(await drill.count()).toEqual({
			states: Array(kills).fill('analysed'),
			runs: kills,
			analyses: kills,
			layouts: 1,
			circuits: 1,
			lapsWithoutAnalysis: 0,
			filesWithoutRow: [],
			rowsWithoutFile: 0,
			parts: []
		});
	} finally {
		await drill.stop();
	}
}

/** Numbers from 0 to 1, the same for the same seed (mulberry32). */
function generator(seed: number): () => number {
	let state = seed;
	return () => {
		state = (state + 0x6d2b79f5) | 0;
		let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
		mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
		return ((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296;
	};
}
