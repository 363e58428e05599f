import { SetupError } from './SetupError.mjs';

/** The stages of `npm test`, in the order in which they are reported. */
export const STAGES = /** @type {const} */ (['format', 'lint', 'types', 'core', 'db', 'browser', 'build', 'e2e']);

/** The stages that run Vitest and so take file names and options of its own. */
export const VITEST_STAGES = /** @type {readonly string[]} */ (['core', 'db', 'browser']);

/**
 * @typedef {object} TestWish
 * @property {readonly string[]} stages
 * @property {boolean} long   also the tests that take minutes (`*.long.test.ts`)
 * @property {string[]} rest  passed on to Vitest or Playwright: file names, -t PATTERN
 */

/**
 * Reads the arguments of `npm test`: `[--long] [--only STAGE[,STAGE…] [arguments for its runner]]`.
 *
 * @param {string[]} args
 * @returns {TestWish}
 * @throws {SetupError} naming what is not understood
 * @example parseTestArguments(['--only', 'db', 'tests/db/jobs.test.ts']) // => { stages: ['db'], long: false, rest: ['tests/db/jobs.test.ts'] }
 */
export function parseTestArguments(args) {
	/** @type {TestWish} */
	const wish = { stages: STAGES, long: false, rest: [] };
	let only = false;
	for (let index = 0; index < args.length; index++) {
		const arg = args[index];
		if (arg === '--long') wish.long = true;
		else if (arg === '--only' || arg.startsWith('--only=')) {
			const names = (arg === '--only' ? (args[++index] ?? '') : arg.slice('--only='.length)).split(',').filter(Boolean);
			const unknown = names.find((name) => !STAGES.some((stage) => stage === name));
			if (names.length === 0 || unknown) {
				throw new SetupError(`--only takes one or more of ${STAGES.join(', ')}${unknown ? `, got "${unknown}"` : ''}.`);
			}
			only = true;
			wish.stages = STAGES.filter((stage) => names.includes(stage));
		} else if (only) wish.rest.push(arg);
		else throw new SetupError(`npm test takes --long and --only STAGE, got "${arg}".`);
	}
	return wish;
}
