import { describe, expect, it } from 'vitest';
import { KerbnoteError } from '../../lib/schemas/kerbnoteError.ts';
import { parseAnalyseArguments } from './parseArguments.ts';

describe('parseAnalyseArguments', () => {
	it.each([
		{ name: 'a file alone', words: ['run.csv'], expected: { file: 'run.csv' } },
		{
			name: 'every option, before and after the file',
			words: ['--reference', 'ref.csv', '--lap', '3', 'run.csv', '--reference-lap', '0', '--run', '2'],
			expected: { file: 'run.csv', reference: 'ref.csv', lap: 3, referenceLap: 0, run: 2 }
		},
		{
			name: 'values joined by an equals sign',
			words: ['run.csv', '--lap=3', '--reference=a=b.csv'],
			expected: { file: 'run.csv', lap: 3, reference: 'a=b.csv' }
		},
		{
			name: 'a line south of the equator and west of Greenwich',
			words: ['run.csv', '--line', '-33.1,-70.5,-33.2,-70.5'],
			expected: {
				file: 'run.csv',
				line: { latitudeA: -33.1, longitudeA: -70.5, latitudeB: -33.2, longitudeB: -70.5 }
			}
		}
	])('reads $name', ({ words, expected }) => {
		expect(parseAnalyseArguments(words)).toEqual(expected);
	});

	it.each([
		{ words: [], message: 'analyse requires one file, got none' },
		{ words: ['a.csv', 'b.csv'], message: 'analyse requires one file, got 2' },
		{ words: ['a.csv', '--laps', '3'], message: 'analyse knows no option --laps' },
		{ words: ['a.csv', '--lap'], message: '--lap requires a value' },
		{ words: ['a.csv', '--lap='], message: '--lap requires a value' },
		{ words: ['a.csv', '--lap', '1', '--lap', '2'], message: 'analyse takes --lap once' },
		{ words: ['a.csv', '--lap', '1.5'], message: '--lap requires a whole number from 0, got 1.5' },
		{ words: ['a.csv', '--lap', '-1'], message: '--lap requires a whole number from 0, got -1' },
		{ words: ['a.csv', '--run', '0'], message: '--run requires a whole number from 1, got 0' },
		{
			words: ['a.csv', '--line', '1,2,3'],
			message: '--line requires LAT,LON,LAT,LON in degrees, got 1,2,3'
		},
		{
			words: ['a.csv', '--line', '1,2,3,x'],
			message: '--line requires LAT,LON,LAT,LON in degrees, got 1,2,3,x'
		},
		{
			words: ['a.csv', '--line', '91,2,3,4'],
			message: '--line requires LAT,LON,LAT,LON in degrees, got 91,2,3,4'
		},
		{ words: ['a.csv', '--line', '1,2,1,2'], message: '--line requires two different points' }
	])('refuses $words', ({ words, message }) => {
		try {
			parseAnalyseArguments(words);
			expect.unreachable();
		} catch (error) {
			expect(error).toBeInstanceOf(KerbnoteError);
			expect(error).toMatchObject({ code: 'bad_arguments', message });
		}
	});
});
