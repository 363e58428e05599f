import { describe, expect, it } from 'vitest';
import type { DriversView, RosterRow, SentInvitation } from '../../../lib/schemas/invitations.ts';
import { driversLede } from './driversLede.ts';

const row: RosterRow = {
	driver: { id: '0'.repeat(26), name: 'Mira Tansley' },
	grants: ['all runs'],
	through: null,
	runs: 0,
	lastRun: null
};
const sent = (state: SentInvitation['state']): SentInvitation => ({
	id: '0'.repeat(26),
	email: 'mira@example.org',
	as: null,
	state,
	bounced: false,
	expiresAt: '2026-12-15T00:00:00.000Z',
	createdAt: '2026-12-01T00:00:00.000Z'
});

describe('driversLede', () => {
	it.each<{ name: string; view: Pick<DriversView, 'roster' | 'invitations'>; says: string }>([
		{
			name: 'nobody',
			view: { roster: [], invitations: [] },
			says: 'Nobody lets you see their laps yet. Invite a driver; they choose what you see.'
		},
		{ name: 'one driver', view: { roster: [row], invitations: [] }, says: 'One driver lets you see laps.' },
		{
			name: 'drivers and invitations',
			view: {
				roster: [row, row],
				invitations: [sent('open'), sent('waiting_guardian'), sent('declined'), sent('expired')]
			},
			says: 'Two drivers let you see laps; two invitations wait for an answer.'
		},
		{
			name: 'one open invitation',
			view: { roster: [], invitations: [sent('open')] },
			says: 'Nobody lets you see their laps yet; one invitation waits for an answer.'
		}
	])('counts $name', ({ view, says }) => {
		expect(driversLede(view)).toBe(says);
	});
});
