import type { GrantScope } from '../../../schemas/invitations.ts';

/** What is asked to be seen, for a sentence: "all your runs", "their runs at Vallmere Park"; null where laps are not asked for. */
export function asksForText(
	{ asked_scope, circuit, event }: { asked_scope: GrantScope | null; circuit: string | null; event: string | null },
	whose: 'your' | 'their'
): string | null {
	switch (asked_scope) {
		case null:
			return null;
		case 'all':
			return `all ${whose} runs`;
		case 'circuit':
			return circuit === null ? `${whose} runs at one circuit` : `${whose} runs at ${circuit}`;
		case 'event':
			return event === null ? `${whose} runs of one event` : `${whose} runs of ${event}`;
		case 'run':
			return `one of ${whose} runs`;
	}
}
