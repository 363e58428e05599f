import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { findingCodeSchema } from './codes.ts';
import { publishedAnalysisSchema } from './publishedSchema.ts';

const FILE = fileURLToPath(new URL('../../../static/schemas/kerbnote.analysis-1.json', import.meta.url));

describe('publishedAnalysisSchema', () => {
	it('is what static/schemas serves; UPDATE_GOLDEN=1 writes it anew', () => {
		const text = `${JSON.stringify(publishedAnalysisSchema(), null, '\t')}\n`;
		if (process.env.UPDATE_GOLDEN && !process.env.CI) {
			mkdirSync(dirname(FILE), { recursive: true });
			writeFileSync(FILE, text);
		}
		expect(readFileSync(FILE, 'utf8')).toBe(text);
	});

	it('publishes the codes of findings and lets readers meet new fields', () => {
		const text = JSON.stringify(publishedAnalysisSchema());
		for (const code of findingCodeSchema.options) expect(text).toContain(`"${code}"`);
		expect(text).not.toContain('"additionalProperties":false');
	});
});
