import type { RunListItem } from './views.ts';

/** A run that waits for a debrief. */
export interface InTrayItem {
	run: RunListItem;
	/** by when; two days after it was handed over where nobody promised anything */
	promisedAt: string;
	/** did the coach promise it themself */
	promised: boolean;
	/** the driver's first run on this layout in this car */
	isFirst: boolean;
	/** best lap against that of the run before, s; negative is quicker; null where either has none */
	changeS: number | null;
	/** open focus points that this run was scored against */
	focus: {
		id: string;
		text: string;
		corner: { number: number | null; name: string | null } | null;
		met: number;
		scored: number;
		before: { met: number; scored: number } | null;
		proposed: boolean;
	}[];
	/** a first run, a best lap, or scores: else it may be closed unread */
	hasNews: boolean;
	/** id of the viewer's draft on it */
	draft: string | null;
}
