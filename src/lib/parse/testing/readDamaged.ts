import { KerbnoteError } from '../../schemas/kerbnoteError.ts';
import { RunReader } from '../runReader.ts';
import { ACCEPTED_CASES } from './cases.ts';
import { mutateFile } from './mutateFile.ts';

/** A file of a thousand columns takes its time without telling more. */
const SOURCES = ACCEPTED_CASES.filter(({ bytes }) => bytes.length < 300_000);

/**
 * Reads one damaged file of the cases.
 *
 * @returns what was wrong with the outcome; null where it is a run whose time goes forward or a known refusal, in time
 */
export function readDamaged(seed: number): string | null {
	const { name, bytes } = SOURCES[seed % SOURCES.length];
	const file = mutateFile(bytes, seed);
	const begun = performance.now();
	let wrong: string | null = null;
	try {
		const reader = new RunReader({ fileName: 'damaged.csv' });
		for (let at = 0; at < file.length; at += 50_021) reader.push(file.subarray(at, at + 50_021));
		for (const { timeS } of reader.end()) {
			if (!timeS.every((time, i) => i === 0 || time > timeS[i - 1])) wrong = 'time does not go forward';
		}
	} catch (error) {
		if (!(error instanceof KerbnoteError)) wrong = String(error);
	}
	const seconds = (performance.now() - begun) / 1000;
	if (seconds > 5) wrong = `took ${seconds.toFixed(1)} s`;
	return wrong === null ? null : `${name}, seed ${seed}: ${wrong}`;
}
