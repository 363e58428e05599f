import { describe, expect, it } from 'vitest';
import type { UploadHead } from '../../../lib/schemas/views.ts';
import { rowRemedy, rowShare, rowText, type ToldRow } from './rowText.ts';

const head: UploadHead = {
	id: '0'.repeat(26),
	fileName: 'a.csv',
	kind: 'file',
	archive: null,
	sizeBytes: 4_000_000,
	receivedBytes: 4_000_000,
	state: 'analysed',
	stage: 'done',
	progress: 1,
	rowsRead: 90_000,
	createdAt: '2026-05-14T18:05:00.000Z',
	error: null,
	runIds: ['1'.repeat(26)]
};
const row = (changes: Partial<ToldRow> = {}): ToldRow => ({
	phase: 'sending',
	sentBytes: 1_000_000,
	sizeBytes: 4_000_000,
	file: null,
	head: null,
	problem: null,
	knownBefore: false,
	...changes
});
const plain = (text: string) => text.replaceAll('\u00a0', ' ');

describe('rowText', () => {
	it.each<[Partial<ToldRow>, string]>([
		[{}, 'On its way, 1.0 MB of 4.0 MB'],
		[{ phase: 'waiting' }, 'Waits for the file before it'],
		[{ phase: 'cut' }, 'The connection is gone at 1.0 MB of 4.0 MB; it goes on by itself when it is back'],
		[{ phase: 'paused' }, 'Paused at 1.0 MB of 4.0 MB'],
		[{ phase: 'arrived' }, 'Here'],
		[{ phase: 'arrived', head }, 'Understood: one run'],
		[
			{ phase: 'arrived', head: { ...head, state: 'reading', stage: 'reading' } },
			'Reading columns, 90 000 rows so far'
		],
		[{ phase: 'arrived', head: { ...head, kind: 'archive' } }, 'Unpacked'],
		[{ phase: 'arrived', head, knownBefore: true }, 'This file was here before, so it was not taken twice: understood'],
		[
			{ phase: 'failed', problem: { message: 'a file requires at most 500 MB', remedy: 'cut it', again: false } },
			'A file requires at most 500 MB'
		]
	])('says of %j: %s', (changes, expected) => {
		expect(plain(rowText(row(changes))).replaceAll('\u202f', ' ')).toBe(expected);
	});

	it('names line and column of a refusal, and what to do', () => {
		const error = {
			code: 'time_not_increasing',
			message: 'time runs backwards',
			row: 14,
			column: 't',
			remedy: 'export it again.'
		} as const;
		const refused = row({ phase: 'arrived', head: { ...head, state: 'refused', error } });
		expect(rowText(refused)).toBe('Refused: time runs backwards (line 14, column “t”)');
		expect(rowRemedy(refused)).toBe('Export it again.');
	});
});

describe('rowShare', () => {
	it('never runs backwards from sending to reading', () => {
		const shares = [
			rowShare(row({ sentBytes: 0 })),
			rowShare(row()),
			rowShare(row({ sentBytes: 4_000_000 })),
			rowShare(row({ phase: 'arrived', head: { ...head, progress: 0 } })),
			rowShare(row({ phase: 'arrived', head }))
		];
		expect(shares).toEqual([...shares].sort((one, other) => one - other));
		expect(shares.at(-1)).toBe(1);
	});
});
