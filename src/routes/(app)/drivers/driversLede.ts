import { capitalise, countOf } from '../../../lib/format/count.ts';
import type { DriversView } from '../../../lib/schemas/invitations.ts';

/** The page's conclusion: who lets the reader see laps, and what waits for an answer. */
export function driversLede({ roster, invitations }: Pick<DriversView, 'roster' | 'invitations'>): string {
	if (roster.length === 0 && invitations.length === 0) {
		return 'Nobody lets you see their laps yet. Invite a driver; they choose what you see.';
	}
	const drivers =
		roster.length === 0
			? 'Nobody lets you see their laps yet'
			: `${capitalise(countOf(roster.length, 'driver'))} let${roster.length === 1 ? 's' : ''} you see laps`;
	const waiting = invitations.filter(({ state }) => state === 'open' || state === 'waiting_guardian').length;
	return waiting === 0
		? `${drivers}.`
		: `${drivers}; ${countOf(waiting, 'invitation')} ${waiting === 1 ? 'waits' : 'wait'} for an answer.`;
}
