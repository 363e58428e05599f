import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { capitalise, countInWords, countOf, figureOf, listInWords } from './count.ts';
import { formatDay, formatMoment } from './date.ts';
import { deltaWord, formatDelta, formatSignedSeconds } from './delta.ts';
import { formatDistance, formatStretch } from './distance.ts';
import { formatLapTime } from './lapTime.ts';
import { formatNumber } from './number.ts';
import { formatSize } from './size.ts';
import { formatSpeed } from './speed.ts';
import { formatUnit } from './unit.ts';

/** Shows no-break spaces as "_", so that the tables below can be read. */
const shown = (text: string) => text.replaceAll('\u00a0', '_');

describe('formatLapTime', () => {
	it.each([
		{ timeS: 98.947, expected: '1:38.947' },
		{ timeS: 48.377, expected: '0:48.377' },
		{ timeS: 9.05, expected: '0:09.050' },
		{ timeS: 0, expected: '0:00.000' },
		{ timeS: 59.9996, expected: '1:00.000' },
		{ timeS: 119.99951, expected: '2:00.000' },
		{ timeS: 3599.9999, expected: '1:00:00.000' },
		{ timeS: 3723.4, expected: '1:02:03.400' },
		{ timeS: null, expected: '–' },
		{ timeS: undefined, expected: '–' },
		{ timeS: NaN, expected: '–' },
		{ timeS: -1, expected: '–' },
		{ timeS: Infinity, expected: '–' }
	])('writes $timeS s as $expected', ({ timeS, expected }) => {
		expect(formatLapTime(timeS)).toBe(expected);
	});

	it.each([
		{ timeS: 108.46, decimals: 1, expected: '1:48.5' },
		{ timeS: 119.96, decimals: 1, expected: '2:00.0' },
		{ timeS: 65.4, decimals: 0, expected: '1:05' }
	])('rounds $timeS s to $decimals decimals', ({ timeS, decimals, expected }) => {
		expect(formatLapTime(timeS, decimals)).toBe(expected);
	});

	it('reads back to within half of the last digit', () => {
		fc.assert(
			fc.property(fc.double({ min: 0, max: 20_000, noNaN: true }), (timeS) => {
				const parts = formatLapTime(timeS).split(':').map(Number);
				const back = parts.reduce((total, part) => total * 60 + part, 0);
				expect(Math.abs(back - timeS)).toBeLessThanOrEqual(0.0005 + 1e-9);
				expect(parts.slice(1).every((part) => part < 60)).toBe(true);
			}),
			{ seed: 38, numRuns: 300 }
		);
	});
});

describe('formatDelta', () => {
	it.each([
		{ deltaS: 0.312, expected: '+0.312_s_lost' },
		{ deltaS: -0.047, expected: '−0.047_s_found' },
		{ deltaS: 0, expected: '0.000_s_level' },
		{ deltaS: 0.0004, expected: '0.000_s_level' },
		{ deltaS: -0.0004, expected: '0.000_s_level' },
		{ deltaS: 12.5, expected: '+12.500_s_lost' },
		{ deltaS: NaN, expected: '–' },
		{ deltaS: null, expected: '–' }
	])('writes $deltaS s as $expected', ({ deltaS, expected }) => {
		expect(shown(formatDelta(deltaS))).toBe(expected);
	});

	it('takes fewer decimals for the cost of a finding', () => {
		expect(shown(formatDelta(0.1249, 2))).toBe('+0.12_s_lost');
		expect(formatSignedSeconds(-0.5, 1)).toBe('−0.5');
	});

	it('never says lost or found of a figure that reads as zero', () => {
		fc.assert(
			fc.property(fc.double({ min: -0.01, max: 0.01, noNaN: true }), (deltaS) => {
				expect(formatSignedSeconds(deltaS) === '0.000').toBe(deltaWord(deltaS) === 'level');
			}),
			{ seed: 12, numRuns: 300 }
		);
	});
});

describe('formatNumber and units', () => {
	it.each([
		{ text: formatNumber(1535), expected: '1_535' },
		{ text: formatNumber(92210), expected: '92_210' },
		{ text: formatNumber(1234567.891, { decimals: 2 }), expected: '1_234_567.89' },
		{ text: formatNumber(-14.62, { decimals: 1 }), expected: '−14.6' },
		{ text: formatNumber(-0.04, { decimals: 1 }), expected: '0.0' },
		{ text: formatNumber(0.04, { decimals: 1, signed: true }), expected: '0.0' },
		{ text: formatNumber(NaN), expected: '–' },
		{ text: formatUnit(75, '%'), expected: '75_%' },
		{ text: formatUnit(143, '°'), expected: '143°' },
		{ text: formatUnit(4, ''), expected: '4' },
		{ text: formatUnit(null, 'bar'), expected: '–' },
		{ text: formatDistance(3621), expected: '3_621_m' },
		{ text: formatDistance(12.34, 1), expected: '12.3_m' },
		{ text: formatStretch(405, 440), expected: '405–440_m' },
		{ text: formatSpeed(117.4), expected: '117_km/h' },
		{ text: formatSpeed(160.9344, 'mph'), expected: '100_mph' },
		{ text: formatSpeed(null, 'mph'), expected: '–' },
		{ text: formatSize(1), expected: '1_byte' },
		{ text: formatSize(912_400), expected: '912_kB' },
		{ text: formatSize(999_600), expected: '1.0_MB' },
		{ text: formatSize(18_400_000), expected: '18.4_MB' },
		{ text: formatSize(2_000_000_000), expected: '2.0_GB' }
	])('sets $expected', ({ text, expected }) => {
		expect(shown(text)).toBe(expected);
	});
});

describe('counts', () => {
	it.each([
		{ text: countInWords(0), expected: 'no' },
		{ text: countInWords(12), expected: 'twelve' },
		{ text: countInWords(13), expected: '13' },
		{ text: countOf(1, 'lap'), expected: 'one lap' },
		{ text: countOf(9, 'lap'), expected: 'nine laps' },
		{ text: countOf(2, 'entry', 'entries'), expected: 'two entries' },
		{ text: figureOf(1, 'run'), expected: '1_run' },
		{ text: figureOf(1200, 'run'), expected: '1_200_runs' },
		{ text: capitalise(countOf(4, 'corner')), expected: 'Four corners' },
		{ text: listInWords([]), expected: '' },
		{ text: listInWords(['4']), expected: '4' },
		{ text: listInWords(['4', '8', '6']), expected: '4, 8 and 6' }
	])('says "$expected"', ({ text, expected }) => {
		expect(shown(text)).toBe(expected);
	});
});

describe('formatDay', () => {
	const now = new Date('2026-06-01T00:00:00Z');

	it.each([
		{ name: 'leaves out this year', text: formatDay('2026-05-14T12:00:00Z', { now }), expected: '14_May' },
		{ name: 'says another year', text: formatDay('2025-05-14T12:00:00Z', { now }), expected: '14_May_2025' },
		{ name: 'says the year where none is known', text: formatDay('2026-05-14T12:00:00Z'), expected: '14_May_2026' },
		{
			name: 'takes the day of the time zone',
			text: formatDay('2026-05-14T23:30:00Z', { now, timeZone: 'Asia/Tokyo' }),
			expected: '15_May'
		},
		{
			name: 'follows a locale',
			text: formatDay('2026-05-14T12:00:00Z', { now, locale: 'de-DE' }),
			expected: '14._Mai'
		},
		{ name: 'gives a moment', text: formatMoment('2026-05-14T16:05:00Z', { now }), expected: '14_May, 16:05' }
	])('$name', ({ text, expected }) => {
		expect(shown(text)).toBe(expected);
	});
});
