import { capitalise, countInWords, countOf, figureOf, listInWords } from '../format/count.ts';
import type { UploadHead, UploadStage } from '../schemas/views.ts';

const STAGE_TEXT: Record<UploadStage, string> = {
	waiting: 'waiting its turn',
	reading: 'reading columns',
	laps: 'finding laps',
	corners: 'finding corners',
	storing: 'writing it down',
	done: 'done'
};

type Told = Pick<UploadHead, 'state' | 'stage' | 'error'> & Partial<Pick<UploadHead, 'kind' | 'rowsRead'>>;

/**
 * Where an upload stands, in a few words: "finding laps", "refused: the file has neither speed nor distance nor position".
 */
export function describeUpload({ state, stage, error, kind = 'file', rowsRead = null }: Told) {
	switch (state) {
		case 'receiving':
			return 'on its way';
		case 'stored':
			return STAGE_TEXT.waiting;
		case 'reading':
			if (kind === 'archive') return 'unpacking';
			return stage === 'reading' && rowsRead !== null && rowsRead > 0
				? `${STAGE_TEXT.reading}, ${figureOf(rowsRead, 'row')} so far`
				: STAGE_TEXT[stage];
		case 'needs_answer':
			return error === null ? 'needs an answer from you' : `needs an answer from you: ${error.message}`;
		case 'analysed':
			return kind === 'archive' ? 'unpacked' : 'understood';
		case 'refused':
			return error === null ? 'refused' : `refused: ${error.message}`;
	}
}

/** Where in the file it was: "line 14, column “speed”"; "" where no place is known. */
export function placeOf({ row, column }: { row: number | null; column: string | null }) {
	return [row === null ? null : `line ${row}`, column === null ? null : `column “${column}”`]
		.filter((part) => part !== null)
		.join(', ');
}

/** Is the answer final, so that nobody needs to ask again? */
export function isSettled({ state }: Pick<UploadHead, 'state'>) {
	return state === 'analysed' || state === 'refused' || state === 'needs_answer';
}

/** How the files stand together, in one sentence: for the page's lead and for a screen reader. */
export function describeProgress(
	rows: readonly { isDone: boolean; phase: string; head: Pick<UploadHead, 'state' | 'kind'> | null }[]
) {
	const done = rows.filter(({ isDone }) => isDone);
	const count = (state: UploadHead['state']) => done.filter(({ head }) => head?.state === state).length;
	const understood = count('analysed');
	if (done.length === 0) return `${capitalise(countOf(rows.length, 'file'))} on the way.`;
	if (understood === rows.length) {
		return rows.length === 1 ? 'The file is understood.' : `All ${countOf(rows.length, 'file')} are understood.`;
	}
	const asks = count('needs_answer');
	const failed = done.length - understood - asks;
	const parts = [
		understood > 0 ? `${countInWords(understood)} ${understood === 1 ? 'is' : 'are'} understood` : '',
		asks > 0 ? `${countInWords(asks)} ${asks === 1 ? 'needs' : 'need'} an answer` : '',
		failed > 0 ? `${countInWords(failed)} could not be used` : '',
		done.length < rows.length ? `${countInWords(rows.length - done.length)} still on the way` : ''
	].filter((part) => part !== '');
	return `${capitalise(`of ${countOf(rows.length, 'file')} ${listInWords(parts)}`)}.`;
}
