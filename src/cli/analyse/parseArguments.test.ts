import { describe, expect, it } from 'vitest';
import { KerbnoteError } from '../../lib/schemas/kerbnoteError.ts';
import { parseAnalyseArguments } from './parseArguments.ts';

describe('parseAnalyseArguments', () => {
	it.each([
		{ name: 'a file alone', words: ['run.csv'], expected: { kind: 'run', file: 'run.csv' } },
		{
			name: 'every option, before and after the file',
			words: ['--reference', 'ref.csv', '--lap', '3', 'run.csv', '--reference-lap', '0', '--run', '2'],
			expected: { kind: 'run', file: 'run.csv', reference: 'ref.csv', lap: 3, referenceLap: 0, run: 2 }
		},
		{
			name: 'values joined by an equals sign',
			words: ['run.csv', '--lap=3', '--reference=a=b.csv'],
			expected: { kind: 'run', file: 'run.csv', lap: 3, reference: 'a=b.csv' }
		},
		{
			name: 'a line south of the equator and west of Greenwich',
			words: ['run.csv', '--line', '-33.1,-70.5,-33.2,-70.5'],
			expected: {
				kind: 'run',
				file: 'run.csv',
				line: { latitudeA: -33.1, longitudeA: -70.5, latitudeB: -33.2, longitudeB: -70.5 }
			}
		},
		{ name: 'a pedal sweep', words: ['--pedal', 'sweep.csv'], expected: { kind: 'pedal', file: 'sweep.csv' } },
		{ name: 'a stint', words: ['--stint', 'laps.csv'], expected: { kind: 'stint', file: 'laps.csv' } },
		{
			name: 'a stint with its fuel',
			words: ['--fuel', '2.1,0.032', '--stint=laps.csv'],
			expected: { kind: 'stint', file: 'laps.csv', fuel: { kgPerLap: 2.1, sPerKg: 0.032 } }
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
		{ words: ['a.csv', '--fuel', '1,2'], message: 'analyse takes no --fuel without --stint' },
		{ words: ['a.csv', '--pedal', 'b.csv'], message: 'analyse requires one file, got 2' },
		{ words: ['--pedal', 'b.csv', '--lap', '1'], message: 'analyse takes no --lap with --pedal' },
		{ words: ['--pedal', 'b.csv', '--stint', 'c.csv'], message: 'analyse takes no --stint with --pedal' },
		{
			words: ['--stint', 'b.csv', '--fuel', '2'],
			message: '--fuel requires KG_PER_LAP,S_PER_KG, both from 0, got 2'
		},
		{
			words: ['--stint', 'b.csv', '--fuel', '2,-1'],
			message: '--fuel requires KG_PER_LAP,S_PER_KG, both from 0, got 2,-1'
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
