import { describe, expect, it } from 'vitest';
import type { SourceColumn } from '../schemas/analysisDocument.ts';
import { unitText } from '../texts/columnUnit.ts';
import { columnRows } from './columnRows.ts';

const column = (changes: Partial<SourceColumn>): SourceColumn => ({
	header: 'v',
	channel: 'speed',
	unit: 'm/s',
	confidence: 1,
	min: 0,
	max: 231.4,
	samples: ['43.48', '-43.61'],
	...changes
});

describe('columnRows', () => {
	const shown = (text: string) => text.replaceAll('\u00a0', '_');

	it('lists what is needed first, then what has no column, and leaves out what is not used', () => {
		const rows = columnRows(
			[
				column({ channel: null, header: 'oil' }),
				column({ channel: 'gear', unit: '' }),
				column({}),
				column({ channel: 'time', unit: 's' })
			],
			[
				{ channel: 'distance', instead: 'from speed' },
				{ channel: 'positions', instead: null }
			]
		);
		expect(rows.map((row) => row.need)).toEqual(['Time', 'Speed', 'Gear', 'Distance', 'Positions']);
		expect(rows[3]).toMatchObject({ header: null, instead: 'from speed' });
	});

	it.each([
		{ name: 'a converted speed', changes: {}, unit: 'm/s → km/h', range: '0 to_231_km/h' },
		{
			name: 'a brake pressure',
			changes: { channel: 'brake', unit: 'bar', max: 68.2 },
			unit: 'bar',
			range: '0.0 to_68.2_bar'
		},
		{ name: 'whole numbers', changes: { channel: 'gear', unit: '', min: 1, max: 6 }, unit: '', range: '1 to_6' },
		{
			name: 'small numbers',
			changes: { channel: 'yawRate', unit: 'deg/s', min: -0.41, max: 0.5 },
			unit: '°/s → rad/s',
			range: '−0.41 to_0.50_rad/s'
		},
		{ name: 'an empty column', changes: { min: null, max: null }, unit: 'm/s → km/h', range: '' }
	] as const)('writes unit and range of $name', ({ changes, unit, range }) => {
		const [row] = columnRows([column(changes)], []);
		expect(row.unit).toBe(unit);
		expect(shown(row.range)).toBe(range);
	});

	it('says where a recognition is not plain, and sets real minus signs', () => {
		const [sure] = columnRows([column({})], []);
		expect(sure.doubt).toBeNull();
		expect(sure.samples).toEqual(['43.48', '−43.61']);
		expect(columnRows([column({ confidence: 0.6 })], [])[0].doubt).toBe('fairly sure');
		expect(columnRows([column({ confidence: 0.3 })], [])[0].doubt).toBe('a guess, please check');
	});
});

describe('unitText', () => {
	it.each([
		['throttle', '0..1', '0–1 → %'],
		['throttle', 'raw counts', 'raw counts'],
		['brake', 'psi', 'psi → bar'],
		['brake', 'kN', 'kN → N'],
		['brake', 'switch', 'on or off'],
		['steering', 'deg', '°'],
		['latitude', '1e-7 deg', '° · 10⁷ → °'],
		['wheelSpeedFl', 'rad/s', 'rad/s'],
		['wheelSpeedFl', 'mph', 'mph → km/h'],
		['gear', '–', ''],
		['lap', '', '']
	] as const)('%s in "%s" is written "%s"', (channel, unit, expected) => {
		expect(unitText(channel, unit)).toBe(expected);
	});
});
