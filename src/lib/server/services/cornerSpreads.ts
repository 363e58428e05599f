import { median, sampleStandardDeviation } from 'simple-statistics';
import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { CornerSpread, LapRow } from '../../schemas/views.ts';

/** Under this many laps a standard deviation says nothing. */
const FEWEST_FOR_SPREAD = 3;

/**
 * How evenly each corner was driven over the clean laps of a run.
 *
 * @param laps of one run
 * @param metrics of the same run
 * @returns one entry for each numbered corner that was measured, in order
 */
export function cornerSpreads(laps: readonly LapRow[], metrics: readonly CornerMetrics[]): CornerSpread[] {
	const clean = new Map(laps.filter((lap) => lap.clean).map((lap) => [lap.number, lap.id]));
	const byCorner = new Map<number, CornerMetrics[]>();
	for (const entry of metrics) {
		if (!clean.has(entry.lap)) continue;
		byCorner.set(entry.corner, [...(byCorner.get(entry.corner) ?? []), entry]);
	}
	return [...byCorner]
		.sort(([a], [b]) => a - b)
		.map(([corner, entries]) => {
			const timed = entries.filter((entry): entry is CornerMetrics & { timeS: number } => entry.timeS !== null);
			const times = timed.map(({ timeS }) => timeS);
			const speeds = entries.flatMap(({ minKmh }) => (minKmh === null ? [] : [minKmh]));
			const best = timed.reduce<(typeof timed)[number] | null>((a, b) => (a && a.timeS <= b.timeS ? a : b), null);
			return {
				corner,
				laps: times.length,
				bestS: best?.timeS ?? null,
				medianS: times.length > 0 ? median(times) : null,
				sdS: times.length >= FEWEST_FOR_SPREAD ? sampleStandardDeviation(times) : null,
				bestLapId: best ? (clean.get(best.lap) ?? null) : null,
				minKmhBest: best?.minKmh ?? null,
				minKmhMedian: speeds.length > 0 ? median(speeds) : null
			};
		});
}
