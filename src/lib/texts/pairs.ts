import type { PairSuggestion } from '../schemas/views.ts';

/** Why a pair of laps is proposed. */
export const WHY_TEXT: Record<PairSuggestion['why'], string> = {
	coach_shelf: 'the reference your coach put on the shelf',
	shared_best: 'the quickest lap that somebody shares with you here',
	own_best: 'your best lap here',
	own_earlier: 'your best lap of an earlier run',
	own_second: 'another clean lap of the same run'
};
