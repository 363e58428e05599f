import { readFileSync } from 'node:fs';

/**
 * What a stage found.
 *
 * @typedef {object} Outcome
 * @property {number} passed
 * @property {number} failed
 * @property {string} output   shown where something failed
 */

/**
 * Counts a Vitest run from its JSON report.
 *
 * A file that does not load, an error outside every test and a skipped test are failures: none of them is a test that passed.
 *
 * @param {string} path   the report
 * @param {number} exitCode
 * @param {string} output
 * @param {boolean} [filtered] the person chose tests by name: then skipped ones are what they asked for
 * @returns {Outcome}
 */
export function readVitestReport(path, exitCode, output, filtered = false) {
	const report = readReport(path);
	if (!report) return { passed: 0, failed: 1, output: output || 'Vitest left no report' };
	const passed = report.numPassedTests;
	const skipped = filtered ? 0 : report.numPendingTests + report.numTodoTests;
	const brokenFiles = report.testResults.filter(
		/** @param {{ status: string, assertionResults: unknown[] }} file */
		(file) => file.status === 'failed' && file.assertionResults.length === 0
	).length;
	return weigh({ passed, failed: report.numFailedTests + brokenFiles, skipped, exitCode, output });
}

/**
 * Counts a Playwright run from its JSON report; a test that passes only when repeated is a failure.
 *
 * @param {string} path
 * @param {number} exitCode
 * @param {string} output
 * @param {boolean} [filtered]
 * @returns {Outcome}
 */
export function readPlaywrightReport(path, exitCode, output, filtered = false) {
	const stats = readReport(path)?.stats;
	if (!stats) return { passed: 0, failed: 1, output: output || 'Playwright left no report' };
	const { expected, unexpected, flaky, skipped } = stats;
	return weigh({ passed: expected, failed: unexpected + flaky, skipped: filtered ? 0 : skipped, exitCode, output });
}

/**
 * @param {{ passed: number, failed: number, skipped: number, exitCode: number, output: string }} counted
 * @returns {Outcome}
 */
function weigh({ passed, failed, skipped, exitCode, output }) {
	if (skipped > 0)
		return {
			passed,
			failed: failed + skipped,
			output: `${output}\n${skipped} tests are skipped: run them or remove them`
		};
	if (failed > 0) return { passed, failed, output };
	if (passed === 0) return { passed, failed: 1, output: `${output}\nno test ran` };
	// All tests passed and yet it failed: an error outside every test.
	return exitCode === 0 ? { passed, failed, output: '' } : { passed, failed: 1, output };
}

/** @param {string} path */
function readReport(path) {
	try {
		return JSON.parse(readFileSync(path, 'utf8'));
	} catch {
		return null;
	}
}
