import { readFileSync } from 'node:fs';
import { Linter } from 'eslint';
import { describe, expect, it } from 'vitest';
import { nodeProblem } from './nodeVersion.mjs';

describe('nodeProblem', () => {
	it.each(['20.19.0', '20.20.2', '22.0.0', '24.1.0'])('takes Node %s', (version) => {
		expect(nodeProblem(version)).toBe('');
	});

	it.each(['12.22.12', '18.20.4', '20.9.0', '20.18.3'])('refuses Node %s in one sentence', (version) => {
		expect(nodeProblem(version)).toBe(
			`Kerbnote needs Node 20.19 or newer, and this is Node ${version}; install a newer one and start again.`
		);
	});
});

describe('what an old Node must be able to parse', () => {
	const files = ['../start.mjs', '../test.mjs', '../database.mjs', './nodeVersion.mjs'];

	it.each(files)('%s keeps to what Node 12 knows', (name) => {
		const text = readFileSync(new URL(name, import.meta.url), 'utf8');
		// 2020 brings import(), which Node 12.17 has, but also ?. and ??, which it has not.
		const found = new Linter().verify(text, {
			languageOptions: { ecmaVersion: 2020, sourceType: 'module' },
			rules: { 'no-restricted-syntax': ['error', 'ChainExpression', 'LogicalExpression[operator="??"]'] }
		});
		expect(found.map(({ line, message }) => `${line}: ${message}`)).toEqual([]);
	});

	it.each(files)('%s imports nothing at its top but the check itself', (name) => {
		const text = readFileSync(new URL(name, import.meta.url), 'utf8');
		const imported = [...text.matchAll(/^import .*from '(.*)'/gm)].map((found) => found[1]);
		expect(imported.filter((path) => path !== './setup/nodeVersion.mjs')).toEqual([]);
	});

	it('would notice a newer syntax', () => {
		const found = new Linter().verify('a ||= 1', { languageOptions: { ecmaVersion: 2020, sourceType: 'module' } });
		expect(found).toHaveLength(1);
	});
});
