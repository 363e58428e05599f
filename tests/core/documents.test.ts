import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';

const scripts = z.object({ scripts: z.record(z.string(), z.string()) }).parse(readJson('package.json')).scripts;

describe.each(['README.md', 'DEVELOPERS.md'])('%s', (name) => {
	const text = readFileSync(name, 'utf8');

	it('names files and folders that exist', () => {
		const named = [...text.matchAll(/`((?:src|tests|fixtures|migrations|seeds|static|\.ci)\/[^`\s*…]*)`/g)];
		const missing = named.map((found) => found[1]).filter((path) => !existsSync(path));
		expect(missing).toEqual([]);
	});

	it('names commands that package.json has', () => {
		const named = [...text.matchAll(/npm (?:run (?:--silent )?)?([a-z:]+)/g)].map((found) => found[1]);
		expect(named.filter((command) => command !== 'ci' && !(command in scripts))).toEqual([]);
		expect(named.length).toBeGreaterThan(0);
	});

	it('links only to what is there', () => {
		const linked = [...text.matchAll(/\]\((?!https?:|#)([^)\s]+)\)/g)].map((found) => found[1]);
		expect(linked.filter((path) => !existsSync(path))).toEqual([]);
	});
});

function readJson(path: string): unknown {
	return JSON.parse(readFileSync(path, 'utf8'));
}
