import { createHash } from 'node:crypto';
import { mkdirSync, mkdtempSync, readFileSync, renameSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';

/**
 * A TypeScript entry with all that it imports as one plain module. Turning two hundred small sources into JavaScript one by one costs most of a second at each
 * start; as one file they are there in a few hundredths. The file is kept beside the packages and built anew as soon as one of its sources
 * changed, so nobody has to build anything.
 */

const ROOT = fileURLToPath(new URL('../../..', import.meta.url));
const KEPT = join(ROOT, 'node_modules', '.cache', 'kerbnote');

/**
 * @param {string} entry from the project's root
 * @returns {Promise<string>} URL of a module to import
 */
export async function bundle(entry) {
	const name = createHash('sha256').update(`${ROOT} ${entry} ${process.version}`).digest('hex').slice(0, 16);
	const kept = join(KEPT, `${name}.mjs`);
	if (isCurrent(kept)) return pathToFileURL(kept).href;
	const { build } = await import('esbuild');
	const { outputFiles, metafile } = await build({
		absWorkingDir: ROOT,
		entryPoints: [entry],
		bundle: true,
		write: false,
		metafile: true,
		format: 'esm',
		platform: 'node',
		target: 'node20',
		// packages written for require() ask for node's own modules that way
		banner: { js: "import { createRequire } from 'node:module'; const require = createRequire(import.meta.url);" },
		logLevel: 'silent'
	});
	const sources = Object.keys(metafile.inputs).map((path) => ({ path, ...stateOf(join(ROOT, path)) }));
	const text = `${outputFiles[0].text}\n${MARK}${JSON.stringify(sources)}\n`;
	return pathToFileURL(keep(kept, text)).href;
}

/** begins the last line, which lists the sources */
const MARK = '// sources: ';

/** @param {string} path */
function stateOf(path) {
	const { mtimeMs, size } = statSync(path);
	return { mtimeMs, size };
}

/** @param {string} kept */
function isCurrent(kept) {
	try {
		const text = readFileSync(kept, 'utf8');
		const sources = JSON.parse(text.slice(text.lastIndexOf(MARK) + MARK.length));
		return sources.every((/** @type {{ path: string, mtimeMs: number, size: number }} */ source) => {
			const now = stateOf(join(ROOT, source.path));
			return now.mtimeMs === source.mtimeMs && now.size === source.size;
		});
	} catch {
		// no such file, or a source that is gone: build it
		return false;
	}
}

/**
 * Two commands may build at the same time, so the file appears whole or not at all. Where the packages' folder may not be written to, it
 * goes to a folder of its own.
 *
 * @param {string} kept
 * @param {string} text
 * @returns {string} where it is
 */
function keep(kept, text) {
	try {
		mkdirSync(dirname(kept), { recursive: true });
		const fresh = `${kept}.${process.pid}`;
		writeFileSync(fresh, text);
		renameSync(fresh, kept);
		return kept;
	} catch {
		const elsewhere = join(mkdtempSync(join(tmpdir(), 'kerbnote-')), 'bundle.mjs');
		writeFileSync(elsewhere, text);
		return elsewhere;
	}
}
