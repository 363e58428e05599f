import { capitalise, countInWords, countOf } from '../../../../lib/format/count.ts';
import { formatLapTime } from '../../../../lib/format/lapTime.ts';
import { formatUnit } from '../../../../lib/format/unit.ts';
import type { RunView } from '../../../../lib/schemas/views.ts';

type Told = Pick<RunView, 'timedLaps' | 'cleanLaps' | 'bestLap' | 'theoreticalBestS'>;

/** What the run came to: clean laps, the best of them, and what the best corners together would make. */
export function runLede({ timedLaps, cleanLaps, bestLap, theoreticalBestS }: Told) {
	if (bestLap === null) return 'No timed lap in this run, so there is nothing to compare yet.';
	const laps =
		cleanLaps === 0
			? `${capitalise(countOf(timedLaps, 'timed lap'))}, none of them clean`
			: cleanLaps === timedLaps
				? capitalise(countOf(cleanLaps, 'clean lap'))
				: `${capitalise(countInWords(cleanLaps))} clean of ${countOf(timedLaps, 'timed lap')}`;
	const best = `${laps}, ${bestLap.clean ? 'best' : 'fastest'} ${formatLapTime(bestLap.timeS)}.`;
	const gainS = theoreticalBestS === null ? 0 : bestLap.timeS - theoreticalBestS;
	return gainS < 0.001
		? best
		: `${best} The best pass of each corner together is ${formatUnit(gainS, 's', { decimals: 3 })} quicker.`;
}
