import { existsSync, mkdirSync, readdirSync, renameSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { findProgram, run } from './processes.mjs';

/**
 * A set of Debian packages that bring one thing that Kerbnote needs.
 *
 * @typedef {object} Wanted
 * @property {string} what       for a person: "MariaDB", "Chromium"
 * @property {string[]} packages
 * @property {string | null} folder  where they are unpacked when they cannot be installed; null where they only work installed
 */

/**
 * Brings Debian packages onto the machine: installs them as root or by sudo that asks for no password; without either,
 * unpacks them and what they depend on into a folder.
 *
 * Recommended packages are left out: these two sets then bring programs only, and no service that starts by itself.
 *
 * @param {Wanted} wanted
 * @param {(line: string) => void} say
 * @returns {Promise<'installed' | 'unpacked'>}
 * @throws {SetupError} with the exact command where none of it worked
 */
export async function bringDebianPackages(wanted, say) {
	const apt = findProgram(['apt-get']);
	if (!apt) {
		throw new SetupError(
			`${wanted.what} is missing and this machine has no apt-get; install it in your system's way and start again.`
		);
	}
	const asRoot = await rootPrefix();
	if (asRoot) {
		say(`Installing ${wanted.what} (Debian packages ${wanted.packages.join(', ')})`);
		const problem = await install(asRoot, apt, wanted.packages);
		if (!problem) return 'installed';
		throw byHand(wanted, 'could not be installed', problem);
	}
	if (wanted.folder === null) throw byHand(wanted, 'is missing, and without root it cannot be installed', '');
	say(`Unpacking ${wanted.what} into ${wanted.folder} (no root here)`);
	const problem = await unpack(apt, wanted.packages, wanted.folder);
	if (!problem) return 'unpacked';
	throw byHand(wanted, 'is missing, and without root it could not be unpacked either', problem);
}

/**
 * @param {Wanted} wanted
 * @param {string} what
 * @param {string} details
 */
function byHand(wanted, what, details) {
	const command = `sudo apt-get update && sudo apt-get install -y --no-install-recommends ${wanted.packages.join(' ')}`;
	return new SetupError(`${wanted.what} ${what}; run this and start again: ${command}`, {
		details: lastLines(details)
	});
}

/** @returns {Promise<string[] | null>} what to put before a command to run it as root; null where that is not allowed */
async function rootPrefix() {
	if (process.getuid?.() === 0) return [];
	const sudo = findProgram(['sudo']);
	if (sudo && (await run(sudo, ['-n', 'true'])).code === 0) return [sudo, '-n'];
	return null;
}

/**
 * @param {string[]} prefix
 * @param {string} apt
 * @param {string[]} packages
 * @returns {Promise<string>} what went wrong, '' for nothing
 */
async function install(prefix, apt, packages) {
	/** @param {string[]} args */
	const aptGet = (args) => {
		// Another apt may be at work (unattended upgrades, a second start): wait for its lock.
		const words = [
			...prefix,
			'env',
			'DEBIAN_FRONTEND=noninteractive',
			apt,
			'-qq',
			'-o',
			'DPkg::Lock::Timeout=300',
			...args
		];
		return run(words[0], words.slice(1), { whole: true });
	};
	const wish = ['install', '-y', '--no-install-recommends', ...packages];
	if ((await aptGet(wish)).code === 0) return '';
	// The package lists may be missing or old.
	const update = await aptGet(['update']);
	const second = await aptGet(wish);
	return second.code === 0 ? '' : update.output + second.output;
}

/**
 * @param {string} apt
 * @param {string[]} packages
 * @param {string} folder
 * @returns {Promise<string>} what went wrong, '' for nothing
 */
async function unpack(apt, packages, folder) {
	const draft = `${folder}.${process.pid}.draft`;
	const own = `${draft}.apt`;
	const ownLists = ['-o', `Dir::State::lists=${own}/lists`, '-o', `Dir::Cache=${own}/cache`];
	try {
		mkdirSync(draft, { recursive: true });
		let problem = await download(apt, [], packages, draft);
		if (problem) {
			// The machine's package lists may be missing or old, and only root may renew them: keep a set of our own.
			for (const name of ['lists/partial', 'cache/archives/partial']) mkdirSync(join(own, name), { recursive: true });
			const update = await run(apt, ['-qq', ...ownLists, 'update']);
			problem = await download(apt, ownLists, packages, draft);
			if (problem) return update.output + problem;
		}
		for (const name of readdirSync(draft).filter((entry) => entry.endsWith('.deb'))) {
			const { code, output } = await run('dpkg', ['-x', join(draft, name), draft]);
			if (code !== 0) return output;
			rmSync(join(draft, name));
		}
		rmSync(folder, { recursive: true, force: true });
		renameSync(draft, folder);
		return '';
	} finally {
		rmSync(draft, { recursive: true, force: true });
		rmSync(own, { recursive: true, force: true });
	}
}

/**
 * @param {string} apt
 * @param {string[]} options
 * @param {string[]} packages
 * @param {string} into
 * @returns {Promise<string>} what went wrong, '' for nothing
 */
async function download(apt, options, packages, into) {
	const plan = await run(apt, ['-s', ...options, 'install', '--no-install-recommends', ...packages], {
		env: { ...process.env, LC_ALL: 'C' }
	});
	if (plan.code !== 0) return plan.output;
	const names = new Set([...packages, ...plannedPackages(plan.stdout)]);
	const fetched = await run(apt, ['-qq', ...options, 'download', ...names], { cwd: into });
	return fetched.code === 0 ? '' : fetched.output;
}

/**
 * Reads the packages out of what `apt-get --simulate install` prints.
 *
 * @param {string} printed
 * @returns {string[]}
 * @example plannedPackages('Inst galera-4 (26.4 Debian:12 [amd64])\nConf galera-4 (26.4)') // => ['galera-4']
 */
export function plannedPackages(printed) {
	return [...printed.matchAll(/^Inst (\S+)/gm)].map((found) => found[1]);
}

/**
 * Where the shared libraries of an unpacked set of packages lie.
 *
 * @param {string} folder
 * @returns {string[]} for LD_LIBRARY_PATH
 */
export function libraryFolders(folder) {
	return ['usr/lib', 'lib'].flatMap((name) => {
		const base = join(folder, name);
		if (!existsSync(base)) return [];
		const triplets = readdirSync(base).filter((entry) => entry.endsWith('-linux-gnu'));
		return [...triplets.map((entry) => join(base, entry)), base];
	});
}

/**
 * @param {string} text
 * @param {number} [count]
 */
export function lastLines(text, count = 8) {
	return text.trim().split('\n').slice(-count).join('\n');
}
