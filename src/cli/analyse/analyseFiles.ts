import { analyseRun } from '../../lib/analysis/analyseRun.ts';
import type { AnalysisDocument } from '../../lib/schemas/analysisDocument.ts';
import { readRunFile } from './readRunFile.ts';
import type { AnalyseArguments } from './parseArguments.ts';

/**
 * Reads the files that the command line names and analyses them.
 *
 * @throws {KerbnoteError} for everything that is wrong with the files
 */
export async function analyseFiles(args: AnalyseArguments): Promise<AnalysisDocument> {
	const { file, reference, lap, referenceLap, run, line } = args;
	const raws = await readRunFile(file);
	const referenceRaws = reference === undefined ? undefined : await readRunFile(reference);
	return analyseRun(raws, { run, lap, referenceLap, line, reference: referenceRaws, grids: 'compared' }).document;
}
