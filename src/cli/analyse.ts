import { parseAnalyseArguments } from './analyse/parseArguments.ts';
import { KerbnoteError } from '../lib/schemas/kerbnoteError.ts';

/**
 * `analyse FILE.csv[.gz] …`: one JSON document on standard output. Bad input ends with exit code 2 and one line of JSON on standard
 * error, a bug with exit code 1; either way nothing stands on standard output.
 */

const BAD_INPUT = 2;
const BUG = 1;

try {
	const options = parseAnalyseArguments(process.argv.slice(2));
	// loaded only now: wrong arguments are answered at once
	const { analyseFiles } = await import('./analyse/analyseFiles.ts');
	const document = await analyseFiles(options);
	// a reader that closes early (head) has what it wanted
	process.stdout.on('error', (error: NodeJS.ErrnoException) => {
		if (error.code !== 'EPIPE') throw error;
	});
	process.stdout.write(`${JSON.stringify(document)}\n`);
} catch (error) {
	const known = error instanceof KerbnoteError;
	if (!known) console.error(error);
	const told = known
		? error
		: new KerbnoteError(
				'internal',
				`analyse failed: ${error instanceof Error ? error.message : String(error)}`,
				'Report it with the file, if it may be shared.'
			);
	console.error(JSON.stringify(told.toDocument()));
	process.exitCode = known ? BAD_INPUT : BUG;
}
