import { readFileSync, readdirSync } from 'node:fs';
import { isBuiltin } from 'node:module';
import { dirname, join, relative, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';

/**
 * The parts of the source and what each may import, beside itself. No arrow points back: pages stand on charts and services,
 * those on the core, and the core stands alone. Whoever adds a folder decides here where it belongs.
 */
const PURE_PARTS = ['core', 'demo', 'format', 'method', 'texts', 'view', 'state', 'components', 'charts'];
const MAY_IMPORT: Readonly<Record<string, readonly string[]>> = {
	core: [],
	demo: ['core'],
	format: ['core'],
	method: ['core', 'format'],
	texts: ['core', 'format'],
	view: ['core', 'demo', 'format', 'texts'],
	state: ['core', 'format', 'texts', 'view'],
	components: ['core', 'format', 'method', 'state', 'texts', 'view'],
	charts: ['core', 'components', 'demo', 'format', 'state', 'texts', 'view'],
	migrations: [],
	'server base': ['core', 'migrations'],
	'server work': ['core', 'format', 'texts', 'view', 'server base', 'workers'],
	'server hooks': ['core', 'state', 'server base', 'server work'],
	workers: ['core', 'server base', 'server work'],
	shell: ['server hooks'],
	routes: [...PURE_PARTS, 'server base', 'server work', 'server hooks', 'shell'],
	seeds: ['core', 'demo', 'server base', 'server work'],
	cli: ['core', 'demo', 'format', 'method', 'texts', 'view', 'server base', 'server work', 'workers', 'seeds']
};

/** What lies in each part: the first path that fits counts. */
const PARTS: ReadonlyArray<readonly [part: string, paths: readonly string[]]> = [
	['core', ['src/lib/parse/', 'src/lib/analysis/', 'src/lib/schemas/', 'src/lib/units.ts']],
	['server hooks', ['src/lib/server/hooks/']],
	['server base', ['db', 'access', 'auth', 'storage', 'http', 'environment.ts', 'logger.ts'].map(onServer)],
	['server work', ['importing', 'jobs', 'mail', 'services', 'upload'].map(onServer)],
	...PURE_PARTS.slice(1).map((name) => [name, [`src/lib/${name}/`]] as const),
	['routes', ['src/routes/']],
	['workers', ['src/workers/']],
	['cli', ['src/cli/']],
	['shell', ['src/app.', 'src/hooks.']],
	['seeds', ['seeds/']],
	['migrations', ['migrations/']]
];

/** In the core, these would tie the numbers to a screen, a database or a machine. */
const NOT_IN_CORE = /^(svelte|@sveltejs\/|knex|mysql2|\$app|\$env|\$lib|layercake)/;

const files = ['src', 'seeds', 'migrations'].flatMap(sourcesBelow);
const imports = files.flatMap(importsOf);

describe('the parts of the source', () => {
	it('have a place in the table, each of them', () => {
		expect(files.filter((file) => partOf(file) === undefined)).toEqual([]);
		expect(files.length).toBeGreaterThan(100);
	});

	it('import only what stands below them', () => {
		const wrong = imports.filter(({ from, to }) => {
			if (to === null) return false;
			const [part, target] = [partOf(from) ?? '', partOf(to) ?? ''];
			return part !== target && !MAY_IMPORT[part].includes(target);
		});
		expect(wrong.map(describeImport)).toEqual([]);
	});
});

describe('the core', () => {
	const core = imports.filter(({ from }) => partOf(from) === 'core');

	it('knows no screen, no database and no machine', () => {
		const wrong = core.filter(({ name }) => NOT_IN_CORE.test(name) || isBuiltin(name));
		expect(wrong.map(describeImport)).toEqual([]);
	});

	it('names its own files in full, so that it runs without a bundler', () => {
		const wrong = core.filter(({ name }) => name.startsWith('.') && !name.endsWith('.ts'));
		expect(wrong.map(describeImport)).toEqual([]);
	});
});

describe('migrations', () => {
	it('are frozen: they import nothing that can change under them', () => {
		const wrong = imports.filter(({ from, name }) => partOf(from) === 'migrations' && name !== 'knex');
		expect(wrong.map(describeImport)).toEqual([]);
	});
});

describe('what a browser loads', () => {
	it.each(PURE_PARTS)('%s reaches nothing of the server, however far down', (part) => {
		expect(reachable(part).filter((target) => !PURE_PARTS.includes(target))).toEqual([]);
	});
});

interface Import {
	from: string;
	name: string;
	/** a file of ours; null for a package */
	to: string | null;
}

/** Sources without tests, benchmarks, and what only those use. */
function sourcesBelow(folder: string): string[] {
	return readdirSync(folder, { recursive: true, withFileTypes: true })
		.filter((entry) => entry.isFile() && /\.(ts|mjs|js|svelte)$/.test(entry.name))
		.map((entry) => join(entry.parentPath, entry.name))
		.filter((path) => !/\.(test|bench)\.ts$|\.d\.ts$|\/testing\//.test(path));
}

function importsOf(from: string): Import[] {
	// Comments may show an import as an example.
	const text = readFileSync(from, 'utf8').replaceAll(/\/\*[\s\S]*?\*\/|^\s*\/\/.*$/gm, '');
	const found = text.matchAll(
		/^\s*(?:import|export)\b[^;'"]*?\bfrom\s*['"]([^'"]+)['"]|^\s*import\s*['"]([^'"]+)['"]|\bimport\(\s*['"]([^'"]+)['"]/gm
	);
	return [...found].map((match) => {
		const name = match[1] ?? match[2] ?? match[3];
		if (name.startsWith('.')) return { from, name, to: relative('.', resolve(dirname(from), name)) };
		if (name.startsWith('$lib/')) return { from, name, to: join('src/lib', name.slice('$lib/'.length)) };
		return { from, name, to: null };
	});
}

function partOf(path: string): string | undefined {
	// An import may leave out the ending, or name a folder.
	const spellings = [path, `${path}/`, `${path}.ts`];
	return PARTS.find(([, paths]) => paths.some((prefix) => spellings.some((one) => one.startsWith(prefix))))?.[0];
}

function onServer(name: string): string {
	return `src/lib/server/${name}${name.includes('.') ? '' : '/'}`;
}

function reachable(part: string, seen = new Set<string>()): string[] {
	for (const target of MAY_IMPORT[part]) {
		if (seen.has(target)) continue;
		seen.add(target);
		reachable(target, seen);
	}
	return [...seen];
}

function describeImport({ from, name }: Import): string {
	return `${from} -> ${name}`;
}
