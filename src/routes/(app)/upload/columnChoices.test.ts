import { describe, expect, it } from 'vitest';
import type { SourceColumn } from '../../../lib/schemas/analysisDocument.ts';
import { columnMappingSchema } from '../../../lib/schemas/columnMapping.ts';
import { mappingForLaps, mappingFromAnswer, mappingFromForm, rememberFromForm } from './columnChoices.ts';

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

	it('turns a column round, and keeps it turned when laps are counted otherwise', () => {
		const { mapping } = mappingFromForm(
			form({ ...unchanged, 'sign:brake': 'turned', 'sign:speed': 'turned' }),
			columns
		);
		expect(mapping?.columns[2]).toEqual({ header: 'p1', index: 2, channel: 'brake', unit: 'bar', turned: true });
		// A speed has no other way.
		expect(mapping?.columns[1].turned).toBeUndefined();
		const read = columns.map((one) => (one.channel === 'brake' ? { ...one, turned: true } : one));
		expect(mappingForLaps('place', read, mapping)?.columns[2]).toMatchObject({ channel: 'brake', turned: true });
	});

	it.each([
		{ name: 'a column chosen twice', fields: { ...unchanged, 'column:throttle': '2' }, says: /“p1” is chosen twice/ },
		{ name: 'no time', fields: { ...unchanged, 'column:time': '' }, says: /Time needs a column/ },
		{ name: 'a column that is not there', fields: { ...unchanged, 'column:lap': '9' }, says: /not in this file/ },
		{ name: 'no number', fields: { ...unchanged, 'column:lap': 'x' }, says: /not in this file/ }
	])('refuses $name in words', ({ fields, says }) => {
		expect(mappingFromForm(form(fields), columns)).toEqual({ mapping: null, problem: expect.stringMatching(says) });
	});

	it('gives a channel to a column that had none, and takes it from the one that had it', () => {
		const { mapping } = mappingFromForm(form({ ...unchanged, 'as:3': 'brake' }), columns);
		expect(mapping?.columns.slice(2)).toEqual([
			{ header: 'p1', index: 2, channel: null },
			{ header: 'p2', index: 3, channel: 'brake' }
		]);
	});
});

describe('mappingFromAnswer', () => {
	const question = {
		kind: 'columns' as const,
		text: 'What is in these columns?',
		needs: [['time' as const], ['speed' as const, 'distance' as const]],
		columns: [
			{ header: '', index: 0, samples: ['0', '1'], suggested: 'time' as const },
			{ header: '', index: 1, samples: ['40', '41'], suggested: null },
			{ header: '', index: 2, samples: ['3', '3'], suggested: null }
		]
	};

	it('names every column that was asked about', () => {
		expect(mappingFromAnswer(form({ 'as:0': 'time', 'as:1': 'speed', 'unit:1': 'mph', 'as:2': '' }), question)).toEqual(
			{
				problem: null,
				mapping: {
					columns: [
						{ header: '', index: 0, channel: 'time' },
						{ header: '', index: 1, channel: 'speed', unit: 'mph' },
						{ header: '', index: 2, channel: null }
					]
				}
			}
		);
	});

	it.each<{ fields: Record<string, string>; says: string }>([
		{ fields: { 'as:0': 'time' }, says: 'Still needed: one of speed or distance.' },
		{ fields: { 'as:1': 'speed' }, says: 'Still needed: time.' },
		{
			fields: { 'as:0': 'time', 'as:1': 'speed', 'as:2': 'speed' },
			says: 'Speed is chosen for two columns. Choose something else for one of them.'
		}
	])('says $says', ({ fields, says }) => {
		expect(mappingFromAnswer(form(fields), question)).toEqual({ mapping: null, problem: says });
	});
});

describe('rememberFromForm', () => {
	it.each([
		{ answer: 'me', expected: { remember: 'me' } },
		{ answer: 'no', expected: { remember: 'no' } },
		{ answer: 'organisation:abc', expected: { remember: 'organisation', organisation: 'abc' } },
		{ answer: 'everybody', expected: { remember: 'no' } }
	])('reads $answer', ({ answer, expected }) => {
		expect(rememberFromForm(form({ remember: answer }))).toEqual(expected);
	});
});

describe('mappingForLaps', () => {
	const file = [
		column('t', 'time', 's'),
		column('lap', 'lap'),
		column('pulse', 'beacon'),
		column('tl', 'lapTime', 's'),
		column('v', 'speed', 'km/h')
	];
	const left = (mapping: ReturnType<typeof mappingForLaps>) =>
		mapping?.columns.filter(({ channel }) => channel === null).map(({ header }) => header);

	it('leaves every lap column out where the place on the circuit counts, and nothing else', () => {
		const mapping = mappingForLaps('place', file, null);
		expect(left(mapping)).toEqual(['lap', 'pulse', 'tl']);
		expect(mapping?.columns[4]).toEqual({ header: 'v', index: 4, channel: 'speed', unit: 'km/h' });
	});

	it('keeps the one that is chosen', () => {
		expect(left(mappingForLaps('beacon', file, null))).toEqual(['lap', 'tl']);
	});

	it('keeps the time within the lap where there is no other time', () => {
		expect(left(mappingForLaps('place', file.slice(1), null))).toEqual(['lap', 'pulse']);
	});

	it('lets the reader look again, and keeps what was said of other columns', () => {
		const mapping = mappingForLaps('place', file, null);
		expect(mappingForLaps('all', file, mapping)?.columns.map(({ header }) => header)).toEqual(['t', 'v']);
		expect(mappingForLaps('all', file, null)).toBeNull();
	});
});
