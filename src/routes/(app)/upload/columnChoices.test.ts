import { describe, expect, it } from 'vitest';
import type { SourceColumn } from '../../../lib/schemas/analysisDocument.ts';
import { columnMappingSchema } from '../../../lib/schemas/columnMapping.ts';
import { mappingFromForm } from './columnChoices.ts';

const column = (header: string, channel: SourceColumn['channel'], unit = ''): SourceColumn => ({
	header,
	channel,
	unit,
	confidence: 1,
	min: 0,
	max: 1,
	samples: []
});
const columns = [
	column('t', 'time', 's'),
	column('v', 'speed', 'm/s'),
	column('p1', 'brake', 'bar'),
	column('p2', null),
	column('tank', 'fuel', 'l')
];
const form = (fields: Record<string, string>) => new Map(Object.entries(fields));
const unchanged = { 'column:time': '0', 'column:speed': '1', 'column:brake': '2' };

describe('mappingFromForm', () => {
	it('keeps what was understood and leaves other channels to the reader', () => {
		const { mapping } = mappingFromForm(form(unchanged), columns);
		expect(mapping).toEqual({
			columns: [
				{ header: 't', index: 0, channel: 'time', unit: 's' },
				{ header: 'v', index: 1, channel: 'speed', unit: 'm/s' },
				{ header: 'p1', index: 2, channel: 'brake', unit: 'bar' },
				{ header: 'p2', index: 3, channel: null }
			]
		});
		expect(columnMappingSchema.parse(mapping)).toEqual(mapping);
	});

	it('takes another column and lets the unit be found anew', () => {
		const { mapping } = mappingFromForm(form({ ...unchanged, 'column:brake': '3' }), columns);
		expect(mapping?.columns.slice(2)).toEqual([
			{ header: 'p1', index: 2, channel: null },
			{ header: 'p2', index: 3, channel: 'brake' }
		]);
	});

	it('takes a unit that is said', () => {
		const { mapping } = mappingFromForm(form({ ...unchanged, 'unit:speed': 'mph' }), columns);
		expect(mapping?.columns[1]).toEqual({ header: 'v', index: 1, channel: 'speed', unit: 'mph' });
	});

	it.each([
		{ name: 'a column chosen twice', fields: { ...unchanged, 'column:throttle': '2' }, says: /“p1” is chosen twice/ },
		{ name: 'no time', fields: { ...unchanged, 'column:time': '' }, says: /Time needs a column/ },
		{ name: 'a column that is not there', fields: { ...unchanged, 'column:lap': '9' }, says: /not in this file/ },
		{ name: 'no number', fields: { ...unchanged, 'column:lap': 'x' }, says: /not in this file/ }
	])('refuses $name in words', ({ fields, says }) => {
		expect(mappingFromForm(form(fields), columns)).toEqual({ mapping: null, problem: expect.stringMatching(says) });
	});
});
