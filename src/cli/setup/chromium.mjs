import { SetupError } from './SetupError.mjs';
import { bringDebianPackages } from './debianPackages.mjs';
import { findProgram } from './processes.mjs';

const NAMES = ['chromium', 'chromium-browser', 'google-chrome', 'google-chrome-stable'];

/**
 * Finds a Chromium for the browser tests, and brings Debian's onto the machine where that is allowed.
 *
 * @param {string} programsFolder
 * @param {(line: string) => void} say
 * @returns {Promise<string>} absolute path
 * @throws {SetupError} with the exact command where there is none and none may be installed
 */
export async function findChromium(programsFolder, say) {
	const given = process.env.KERBNOTE_CHROMIUM;
	const found = given ? findProgram([given], ['/']) : findProgram(NAMES);
	if (found) return found;
	if (given) throw new SetupError(`KERBNOTE_CHROMIUM names ${given}, and that is not there.`);
	await bringDebianPackages({ what: 'Chromium', packages: ['chromium'], folder: null }, say);
	const brought = findProgram(NAMES);
	if (!brought) throw new SetupError('The package chromium brought no chromium; install one by hand and start again.');
	return brought;
}
