import { describe, expect, it } from 'vitest';
import { SetupError, sentenceFor } from './SetupError.mjs';

describe('sentenceFor', () => {
	it.each([
		{ code: 'ENOSPC', says: 'The disk is full (/srv/var/x); free some space and start again.' },
		{
			code: 'EACCES',
			says: "This account may not write there (/srv/var/x); change the folder's owner or start from a folder of your own."
		},
		{
			code: 'EROFS',
			says: 'The folder is on a read-only disk (/srv/var/x); start from a folder that can be written to.'
		},
		{ code: 'EMFILE', says: 'Too many files are open on this machine; raise the limit (ulimit -n) and start again.' }
	])('says what $code means', ({ code, says }) => {
		const error = Object.assign(new Error(`${code}: open '/srv/var/x'`), { code, path: '/srv/var/x' });
		expect(sentenceFor(error)).toBe(says);
	});

	it('passes on a sentence that is made for people', () => {
		expect(sentenceFor(new SetupError('Port 80 is in use.'))).toBe('Port 80 is in use.');
	});

	it.each([new Error('odd'), 'odd'])('says that something else went wrong, with its words', (thrown) => {
		expect(sentenceFor(thrown)).toBe('Kerbnote could not go on: odd');
	});
});
