import { mkdirSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { ROOT, foldersOf } from './checkout.mjs';
import { buildProduct } from './buildProduct.mjs';
import { run } from './processes.mjs';
import { SetupError } from './SetupError.mjs';
import { serveForJourneys } from './testProduct.mjs';
import { readPlaywrightReport, readVitestReport } from './testReports.mjs';

/**
 * What the stages work with.
 *
 * @typedef {object} Bench
 * @property {string} databaseUrl  of the tests' MariaDB; '' where no stage needs it
 * @property {string} chromium     its path; '' where no stage needs it
 * @property {boolean} long
 * @property {string[]} rest       arguments for Vitest or Playwright
 */

/** @typedef {import('./testReports.mjs').Outcome} Outcome */

const folders = foldersOf('test');
const reports = join(folders.base, 'reports');

/**
 * The work of each stage by its name. A check (format, lint, types, build) counts only where it fails: it is no test.
 *
 * @param {Bench} bench
 * @returns {Record<typeof import('./testArguments.mjs').STAGES[number], () => Promise<Outcome>>}
 */
export function stageWork(bench) {
	mkdirSync(reports, { recursive: true });
	return {
		format: () => check('prettier/bin/prettier.cjs', ['--check', '--log-level', 'warn', '.']),
		lint: () => check('eslint/bin/eslint.js', ['.', '--max-warnings', '0']),
		types: () => check('svelte-check/bin/svelte-check', ['--threshold', 'warning', '--output', 'human']),
		core: () => vitest('core', bench),
		db: () => vitest('db', bench),
		browser: () => vitest('browser', bench),
		build,
		e2e: () => playwright(bench)
	};
}

/**
 * @param {string} script  below node_modules
 * @param {string[]} args
 * @param {NodeJS.ProcessEnv} [env]
 */
function runPackage(script, args, env = process.env) {
	// Node warns where it finds both, so the one that does not hold must be absent.
	const colours = process.stdout.isTTY
		? { ...env, FORCE_COLOR: '1', NO_COLOR: undefined }
		: { ...env, FORCE_COLOR: undefined, NO_COLOR: '1' };
	return run(process.execPath, [join(ROOT, 'node_modules', script), ...args], { cwd: ROOT, env: colours });
}

/**
 * @param {string} script
 * @param {string[]} args
 * @returns {Promise<Outcome>}
 */
async function check(script, args) {
	const { code, output } = await runPackage(script, args);
	return { passed: 0, failed: code === 0 ? 0 : 1, output: code === 0 ? '' : output };
}

/** @returns {Promise<Outcome>} */
async function build() {
	try {
		await buildProduct(ROOT, folders.build, () => {});
		return { passed: 0, failed: 0, output: '' };
	} catch (error) {
		if (!(error instanceof SetupError)) throw error;
		return { passed: 0, failed: 1, output: `${error.message}\n${error.details}` };
	}
}

/**
 * @param {'core' | 'db' | 'browser'} project
 * @param {Bench} bench
 * @returns {Promise<Outcome>}
 */
async function vitest(project, { databaseUrl, chromium, long, rest }) {
	const report = freshReport(project);
	const { code, output } = await runPackage(
		'vitest/vitest.mjs',
		[
			'run',
			'--project',
			project,
			'--reporter=agent',
			'--reporter=json',
			`--outputFile.json=${report}`,
			'--allowOnly=false',
			...rest
		],
		{
			...process.env,
			KERBNOTE_TEST_DATABASE_URL: databaseUrl,
			...(chromium ? { KERBNOTE_CHROMIUM: chromium } : {}),
			KERBNOTE_LONG: long ? '1' : ''
		}
	);
	return readVitestReport(report, code, output, isFiltered(rest));
}

/**
 * @param {Bench} bench
 * @returns {Promise<Outcome>}
 */
async function playwright({ databaseUrl, chromium, long, rest }) {
	const report = freshReport('e2e');
	let product;
	try {
		product = await serveForJourneys(databaseUrl);
	} catch (error) {
		if (!(error instanceof SetupError)) throw error;
		return { passed: 0, failed: 1, output: `${error.message}\n${error.details}` };
	}
	try {
		const { code, output } = await runPackage(
			'@playwright/test/cli.js',
			['test', '-c', 'tests/e2e/playwright.config.ts', '--reporter=dot,json', ...rest],
			{
				...product.env,
				PLAYWRIGHT_JSON_OUTPUT_NAME: report,
				PLAYWRIGHT_SKIP_BROWSER_DOWNLOAD: '1',
				KERBNOTE_CHROMIUM: chromium,
				KERBNOTE_LONG: long ? '1' : ''
			}
		);
		return readPlaywrightReport(report, code, output, isFiltered(rest));
	} finally {
		await product.stop();
	}
}

/** @param {string} name */
function freshReport(name) {
	const path = join(reports, `${name}.json`);
	// The last run's report must not be taken for this one's.
	rmSync(path, { force: true });
	return path;
}

/** @param {string[]} rest */
const isFiltered = (rest) => rest.some((arg) => /^(-t|--testNamePattern|-g|--grep)/.test(arg));
