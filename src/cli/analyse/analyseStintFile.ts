import type { StintDocument } from '../../lib/schemas/stintDocument.ts';
import { KerbnoteError } from '../../lib/schemas/kerbnoteError.ts';
import { judgeStint } from '../../lib/analysis/stint/judgeStint.ts';
import { readLapList, type LapList } from '../../lib/analysis/stint/readLapList.ts';
import type { StintArguments } from './parseArguments.ts';
import { readRunFile, withBytes } from './readRunFile.ts';

/** A list of laps is small; what is larger is a recording. */
const MOST_LIST_BYTES = 2 << 20;

/**
 * Judges a stint from a list of lap times, or from a recording, whose laps are found first.
 *
 * @throws {KerbnoteError} for everything that is wrong with the file
 */
export async function analyseStintFile({ file, fuel }: StintArguments): Promise<StintDocument> {
	const list = await readList(file);
	if (list) return judgeStint(list.laps, fuel, list.warnings);
	// loaded only now: a list needs none of it
	const { analyseRun } = await import('../../lib/analysis/analyseRun.ts');
	const { lapsOfRun } = await import('../../lib/analysis/stint/lapsOfRun.ts');
	const { document } = analyseRun(await readRunFile(file), { grids: 'compared' });
	return judgeStint(lapsOfRun(document.laps), fuel);
}

/** Null where the file is no list of laps, whatever else it is. */
async function readList(file: string): Promise<LapList | null> {
	const bytes = await withBytes(file, async (chunks) => {
		const read: Uint8Array[] = [];
		let size = 0;
		for await (const chunk of chunks) {
			size += chunk.length;
			if (size > MOST_LIST_BYTES) return null;
			read.push(chunk);
		}
		return Buffer.concat(read);
	});
	if (!bytes) return null;
	try {
		return readLapList(bytes);
	} catch (error) {
		// the reader of recordings says better what is wrong with it
		if (error instanceof KerbnoteError && error.code === 'no_header') return null;
		throw error;
	}
}
