import { formatUnit } from '../format/unit.ts';
import { figureOf } from '../format/count.ts';
import type { FocusPoint } from '../schemas/focus.ts';

type Told = Pick<FocusPoint, 'met' | 'scored' | 'trend' | 'paidS' | 'metButSlower' | 'proposed' | 'state' | 'target'>;

const TREND_TEXT = {
	up: 'More laps meet it than in the run before.',
	down: 'Fewer laps meet it than in the run before.'
};

/**
 * What the scores of a focus say, in sentences: the rate, the trend, whether it paid, and what may be done about it. Whether it paid is
 * only said where the interval of the difference leaves no doubt of its sign.
 */
export function focusVerdict({ met, scored, trend, paidS, metButSlower, proposed, state, target }: Told): string[] {
	if (scored === 0) return [];
	const said = [`${met} of ${figureOf(scored, 'lap')} met it since it was set.`];
	if (trend === 'up' || trend === 'down') said.push(TREND_TEXT[trend]);
	if (paidS !== null && paidS.high < 0)
		said.push(`It paid: laps that met it were ${amount(paidS.differenceS)} quicker in the corner.`);
	else if (paidS !== null && paidS.low > 0)
		said.push(`It has not paid: laps that met it were ${amount(paidS.differenceS)} slower in the corner.`);
	else if (paidS !== null) said.push('Whether it pays cannot be told yet.');
	if (metButSlower > 0)
		said.push(`${figureOf(metButSlower, 'lap')} met it but ${metButSlower === 1 ? 'was' : 'were'} slower than usual.`);
	if (proposed) said.push('It holds: it may be closed.');
	else if (state === 'open' && target.scope.holdsOver !== null)
		said.push(
			`Worth closing when ${target.scope.holdsOver.laps} of the last ${target.scope.holdsOver.of} laps of a run meet it.`
		);
	return said;
}

const amount = (seconds: number) => formatUnit(Math.abs(seconds), 's', { decimals: 2 });
