import { describe, expect, it } from 'vitest';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { clean } from './describeTable.ts';
import { findTable } from './findTable.ts';
import { readHeaderText } from './headerText.ts';
import { readAngle } from './readAngle.ts';
import { readNumber } from './readNumber.ts';
import { readClock, readDate } from './readTime.ts';
import { recogniseColumn } from './recogniseColumns.ts';
import { refuseForeignText } from './refuseForeign.ts';
import { RunReader } from './runReader.ts';
import { splitSpaced } from './splitSpaced.ts';
import { readDamaged } from './testing/readDamaged.ts';

describe('damaged files', () => {
	it('end in runs or a known refusal, three hundred of them', { timeout: 240_000 }, () => {
		const wrong = Array.from({ length: 300 }, (_, seed) => readDamaged(seed)).filter((one) => one !== null);
		expect(wrong).toEqual([]);
	});
});

describe('a line without end', () => {
	const chunk = new Uint8Array(1 << 16).fill(0x37);
	it.each([
		['from the first byte on', ''],
		['below a table', `time,speed\n${Array.from({ length: 400 }, (_, i) => `${i / 10},50\n`).join('')}`],
		['in quotes', 'time,speed\n0,"'],
		['behind UTF-16', '\ufeff']
	])('is refused before two megabytes are here: %s', (_, start) => {
		const reader = new RunReader({ fileName: 'endless.csv' });
		let bytes = 0;
		const feed = () => {
			reader.push(new TextEncoder().encode(start));
			// 500 MB, were they asked for
			for (; bytes < 5e8; bytes += chunk.length) reader.push(chunk);
		};
		expect(feed).toThrow(KerbnoteError);
		expect(bytes).toBeLessThan(1 << 21);
	});
});

describe('what reads a cell or a line', () => {
	const long = 20_000;
	const patterns = [
		'1',
		' ',
		':',
		'1:',
		'1 ',
		'-',
		'.',
		'1.',
		',',
		'1,111',
		'°',
		'1°',
		"1'",
		'a',
		'a ',
		'A1',
		'(',
		'[(',
		'm/',
		'_',
		'=',
		'# ',
		'2026-05-17T',
		'<a ',
		'{"a',
		'"',
		'\t',
		'é',
		'速',
		'N1',
		'1e',
		'/'
	];
	const readers: readonly [string, (text: string) => unknown][] = [
		['readNumber', (text) => [readNumber(text, '.'), readNumber(text, ',')]],
		['readClock', readClock],
		['readDate', readDate],
		['readAngle', readAngle],
		['readHeaderText', readHeaderText],
		['recogniseColumn', recogniseColumn],
		['clean', clean],
		['splitSpaced', splitSpaced],
		[
			'refuseForeignText',
			(text) => {
				for (const first of ['', '{', '[1', '<a', '<?']) quietly(() => refuseForeignText(first + text));
			}
		],
		['findTable', (text) => quietly(() => findTable(`${text}\n${text}`, true))]
	];
	it.each(readers)(
		'takes time in step with its length: %s',
		(_, reader) => {
			for (const pattern of patterns) {
				for (const end of ['', 'x', '\u0001']) {
					const text = pattern.repeat(Math.ceil(long / pattern.length)) + end;
					const begun = performance.now();
					reader(text);
					// Anything that grows with the square takes minutes at this length.
					expect(performance.now() - begun, JSON.stringify(pattern + end)).toBeLessThan(5000);
				}
			}
		},
		240_000
	);
});

function quietly(work: () => unknown): void {
	try {
		work();
	} catch (error) {
		if (!(error instanceof KerbnoteError)) throw error;
	}
}
