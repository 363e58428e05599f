import { formatLapTime } from '../../../lib/format/lapTime.ts';
import { formatUnit } from '../../../lib/format/unit.ts';
import type { NotebookView } from '../../../lib/schemas/views.ts';
import { atLayout } from '../../../lib/texts/runs.ts';

type Told = Pick<NotebookView, 'pages' | 'latestRuns'>;

/** A lap this near to the best one is called "level with it": less is noise of a driver, not news. */
const LEVEL_S = 0.05;

/**
 * The conclusion that a notebook opens with: what the last run brought against the best lap of its circuit and car.
 * Speaks only of what is known; with a run that has no timed lap it says just that.
 */
export function notebookLede({ pages, latestRuns }: Told) {
	const last = latestRuns[0];
	if (last === undefined) return 'No run yet. Add a session, and the first page opens by itself.';
	const where = atLayout(last.layout);
	if (last.bestLap === null) return `Your last run ${where} holds no timed lap.`;
	const page = pages.find((candidate) => candidate.layout.id === last.layout.id && candidate.car?.id === last.car?.id);
	const time = formatLapTime(last.bestLap.timeS);
	if (page === undefined || page.bestLap === null) return `Your last run ${where}: best lap ${time}.`;
	if (page.runs === 1) return `Your first run ${where}: best lap ${time}.`;
	if (page.bestLap.runId === last.id) return `Your last run brought your best lap ${where}: ${time}.`;
	const gapS = last.bestLap.timeS - page.bestLap.timeS;
	return Math.abs(gapS) < LEVEL_S
		? `Your last run ${where} was level with your best.`
		: `Your last run ${where} stayed ${formatUnit(gapS, 's', { decimals: 3 })} short of your best.`;
}
