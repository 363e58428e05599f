import type { UploadHead, UploadStage } from '../schemas/views.ts';

const STAGE_TEXT: Record<UploadStage, string> = {
	waiting: 'waiting its turn',
	reading: 'reading columns',
	laps: 'finding laps',
	corners: 'finding corners',
	storing: 'writing it down',
	done: 'done'
};

/**
 * Where an upload stands, in a few words: "finding laps", "refused: the file has neither speed nor distance nor position".
 */
export function describeUpload({ state, stage, error }: Pick<UploadHead, 'state' | 'stage' | 'error'>) {
	switch (state) {
		case 'receiving':
			return 'on its way';
		case 'stored':
			return STAGE_TEXT.waiting;
		case 'reading':
			return STAGE_TEXT[stage];
		case 'needs_answer':
			return 'needs an answer from you';
		case 'analysed':
			return 'understood';
		case 'refused':
			return error === null ? 'refused' : `refused: ${error.message}`;
	}
}

/** Is the answer final, so that nobody needs to ask again? */
export function isSettled({ state }: Pick<UploadHead, 'state'>) {
	return state === 'analysed' || state === 'refused' || state === 'needs_answer';
}
