import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { findingCodeSchema } from './codes.ts';
import { publishedAnalysisSchema, publishedCheckSchemas } from './publishedSchema.ts';

const fileOf = (name: string) =>
	fileURLToPath(new URL(`../../../static/schemas/kerbnote.${name}-1.json`, import.meta.url));

describe('published schemas', () => {
	it.each([
		{ name: 'analysis', schema: publishedAnalysisSchema() },
		{ name: 'pedal', schema: publishedCheckSchemas().pedal },
		{ name: 'stint', schema: publishedCheckSchemas().stint }
	])('of $name are what static/schemas serves; UPDATE_GOLDEN=1 writes them anew', ({ name, schema }) => {
		const text = `${JSON.stringify(schema, null, '\t')}\n`;
		const file = fileOf(name);
		if (process.env.UPDATE_GOLDEN && !process.env.CI) {
			mkdirSync(dirname(file), { recursive: true });
			writeFileSync(file, text);
		}
		expect(readFileSync(file, 'utf8')).toBe(text);
	});

	it('publish the codes of findings and let readers meet new fields', () => {
		const text = JSON.stringify(publishedAnalysisSchema());
		for (const code of findingCodeSchema.options) expect(text).toContain(`"${code}"`);
		expect(text).not.toContain('"additionalProperties":false');
	});
});
