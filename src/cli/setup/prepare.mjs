import { join } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { buildProduct } from './buildProduct.mjs';
import { waitForLock } from './fileLock.mjs';
import { installNpmPackages } from './npmPackages.mjs';

/**
 * Installs the packages and builds, one process of a checkout at a time.
 *
 * @param {object} wish
 * @param {string} wish.root
 * @param {string} [wish.build]  the folder to build into; nothing is built without one
 * @param {(line: string) => void} wish.say
 * @param {() => void} [wish.check]  throws where somebody has asked to stop
 */
export async function installAndBuild({ root, build, say, check }) {
	const release = await waitForLock(join(root, 'var/setup.lock'), {
		patienceS: 900,
		onwait: () => say('Waiting for another start or test that installs or builds in this folder')
	});
	if (!release)
		throw new SetupError(
			'Another start or test has been installing or building here for 15 minutes; stop it and start again.'
		);
	try {
		await installNpmPackages(root, say);
		check?.();
		if (build) await buildProduct(root, build, say);
	} finally {
		release();
	}
}

/**
 * Runs pieces of work side by side and lets all of them come to their end before it reports the first failure, so that
 * nothing goes on behind a process that believes itself finished.
 *
 * @template {readonly unknown[]} Results
 * @param {{ [Index in keyof Results]: Promise<Results[Index]> }} work
 * @returns {Promise<Results>}
 */
export async function together(work) {
	const settled = await Promise.allSettled(work);
	for (const outcome of settled) {
		if (outcome.status === 'rejected') throw outcome.reason;
	}
	return Promise.all(work);
}
