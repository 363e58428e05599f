import { readFileSync, readdirSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';

/** Every `@example expression // => value` in a docstring is run, so that no example is wrong. */

interface Example {
	file: string;
	expression: string;
	value: string;
}

const examples = ['src/lib', 'src/cli'].flatMap(sourcesBelow).flatMap(examplesIn);

describe('an example in a docstring', () => {
	it.each(examples)('$file: $expression', async ({ file, expression, value }) => {
		const exports: Record<string, unknown> = await import(/* @vite-ignore */ resolve(file));
		expect(plainSpaces(evaluate(expression, exports))).toEqual(evaluate(value, exports));
	});

	it('is found where there is one', () => {
		expect(examples.length).toBeGreaterThan(15);
	});
});

/** A docstring writes a no-break space as a space: nobody could tell them apart. */
function plainSpaces(value: unknown): unknown {
	return typeof value === 'string' ? value.replaceAll(/[\u00a0\u202f\u2009]/g, ' ') : value;
}

/** Statements may come before the expression, as in `const a = …; a.value`. */
function evaluate(code: string, exports: Record<string, unknown>): unknown {
	const statements = code.split('; ');
	const body = [...statements.slice(0, -1), `return (${statements.at(-1)})`].join(';\n');
	return new Function(...Object.keys(exports), body)(...Object.values(exports));
}

function examplesIn(file: string): Example[] {
	const lines = readFileSync(file, 'utf8').matchAll(/@example (.+?) \/\/ => (.+)$/gm);
	return [...lines].map(([, expression, value]) => ({ file, expression, value }));
}

function sourcesBelow(folder: string): string[] {
	return readdirSync(folder, { recursive: true, withFileTypes: true })
		.filter(
			(entry) => entry.isFile() && /\.(ts|mjs)$/.test(entry.name) && !/\.test\.ts$|\.svelte\.ts$/.test(entry.name)
		)
		.map((entry) => join(entry.parentPath, entry.name));
}
