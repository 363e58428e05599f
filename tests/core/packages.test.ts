import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';

/**
 * What stands in for an audit service, which not every machine can reach: what is installed is exactly what was looked at.
 * Whoever adds a package meets these lists and decides.
 */

const manifest = z
	.object({
		dependencies: z.record(z.string(), z.string()),
		devDependencies: z.record(z.string(), z.string()),
		engines: z.object({ node: z.string() }),
		allowScripts: z.record(z.string(), z.boolean())
	})
	.parse(readJson('package.json'));

const lock = z
	.object({
		lockfileVersion: z.literal(3),
		packages: z.record(
			z.string(),
			z.object({
				version: z.string().optional(),
				integrity: z.string().optional(),
				resolved: z.string().optional(),
				license: z.string().optional(),
				dev: z.boolean().optional(),
				inBundle: z.boolean().optional(),
				extraneous: z.boolean().optional(),
				hasInstallScript: z.boolean().optional()
			})
		)
	})
	.parse(readJson('package-lock.json'));

const pinned = Object.entries({ ...manifest.dependencies, ...manifest.devDependencies });
const installed = Object.entries(lock.packages).filter(([path]) => path !== '');

/** Permissive, or copyleft by file that is used unchanged: nothing that would bind our own code. */
const LICENCES = [
	'0BSD',
	'Apache-2.0',
	'BSD-2-Clause',
	'BSD-3-Clause',
	'BlueOak-1.0.0',
	'ISC',
	'MIT',
	'MIT-0',
	'MPL-2.0',
	'OFL-1.1'
];

/** State it in a file of theirs and not in their manifest: both MIT, read in the package. */
const LICENCE_ELSEWHERE = ['node_modules/combine-errors', 'node_modules/svelte-toolbelt'];

/** Run code of their own at installation. esbuild checks its binary, which comes as a package; nothing is downloaded. */
const INSTALL_SCRIPTS = ['esbuild'];

describe('package.json', () => {
	it.each(pinned)('pins %s to one version', (_name, version) => {
		expect(version).toMatch(/^\d+\.\d+\.\d+(-[\w.]+)?$/);
	});

	it('lists nothing twice', () => {
		expect(Object.keys(manifest.dependencies).filter((name) => name in manifest.devDependencies)).toEqual([]);
	});

	it('asks for the Node that start checks for', () => {
		expect(manifest.engines.node).toBe('>=20.19');
	});

	it('allows install scripts to the packages that are known to have one', () => {
		expect(Object.keys(manifest.allowScripts)).toEqual(INSTALL_SCRIPTS);
	});
});

describe('package-lock.json', () => {
	it('holds what package.json pins', () => {
		expect(pinned.map(([name]) => [name, lock.packages[`node_modules/${name}`]?.version])).toEqual(pinned);
	});

	it('knows the content of every package by its hash', () => {
		const unknown = installed.filter(([, entry]) => !entry.inBundle && !entry.integrity?.startsWith('sha512-'));
		expect(paths(unknown)).toEqual([]);
	});

	it('names no address: each machine asks the registry that it is set to', () => {
		expect(paths(installed.filter(([, entry]) => entry.resolved !== undefined))).toEqual([]);
	});

	it('holds nothing that nobody asked for', () => {
		expect(paths(installed.filter(([, entry]) => entry.extraneous))).toEqual([]);
	});

	it('brings no install script that has not been looked at', () => {
		const scripted = installed.filter(([, entry]) => entry.hasInstallScript);
		expect([...new Set(paths(scripted).map(packageName))]).toEqual(INSTALL_SCRIPTS);
	});

	it('brings no licence that has not been looked at', () => {
		const others = installed.filter(
			([path, entry]) => !entry.inBundle && !LICENCES.includes(entry.license ?? '') && !LICENCE_ELSEWHERE.includes(path)
		);
		expect(others.map(([path, entry]) => `${path}: ${entry.license ?? 'none'}`)).toEqual([]);
	});

	it('keeps copyleft to the tools, out of what pages and server run on', () => {
		const bound = installed.filter(([, entry]) => !entry.dev && entry.license === 'MPL-2.0');
		// The style compiler that Vite brings, which comes along as a peer of Auth.js; nothing loads it at run time.
		expect(paths(bound).filter((path) => !/^node_modules\/lightningcss(-|$)/.test(path))).toEqual([]);
	});
});

function paths(entries: Array<[string, unknown]>): string[] {
	return entries.map(([path]) => path);
}

function packageName(path: string): string {
	return path.slice(path.lastIndexOf('node_modules/') + 'node_modules/'.length);
}

function readJson(path: string): unknown {
	return JSON.parse(readFileSync(path, 'utf8'));
}
