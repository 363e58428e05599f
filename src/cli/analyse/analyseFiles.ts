import { analyseRun } from '../../lib/analysis/analyseRun.ts';
import type { AnalysisDocument } from '../../lib/schemas/analysisDocument.ts';
import type { PedalDocument } from '../../lib/schemas/pedalDocument.ts';
import type { StintDocument } from '../../lib/schemas/stintDocument.ts';
import { analyseStintFile } from './analyseStintFile.ts';
import type { AnalyseArguments, RunArguments } from './parseArguments.ts';
import { readRunFile } from './readRunFile.ts';
import { readWholeFile } from './readWholeFile.ts';

/**
 * Reads the files that the command line names and analyses them.
 *
 * @throws {KerbnoteError} for everything that is wrong with the files
 */
export async function analyseFiles(args: AnalyseArguments): Promise<AnalysisDocument | PedalDocument | StintDocument> {
	if (args.kind === 'run') return analyseRunFiles(args);
	if (args.kind === 'stint') return analyseStintFile(args);
	const { checkPedal } = await import('../../lib/analysis/pedal/checkPedal.ts');
	return checkPedal(await readWholeFile(args.file));
}

async function analyseRunFiles(args: RunArguments): Promise<AnalysisDocument> {
	const { file, reference, lap, referenceLap, run, line } = args;
	const raws = await readRunFile(file);
	const referenceRaws = reference === undefined ? undefined : await readRunFile(reference);
	return analyseRun(raws, { run, lap, referenceLap, line, reference: referenceRaws, grids: 'compared' }).document;
}
