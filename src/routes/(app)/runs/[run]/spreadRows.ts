import type { RunView } from '../../../../lib/schemas/views.ts';

export interface SpreadRow {
	corner: number;
	name: string | null;
	bestS: number | null;
	/** median pass against the best one */
	medianGapS: number | null;
	sdS: number | null;
	/** 0–1 of the largest spread of the run */
	share: number;
	minKmhBest: number | null;
	minKmhMedian: number | null;
	/** number of the lap that holds the best pass */
	bestLapNumber: number | null;
}

/** Corners of a run with how evenly each was driven, in the order of the lap. */
export function spreadRows({ spread, corners, laps }: Pick<RunView, 'spread' | 'corners' | 'laps'>): SpreadRow[] {
	const widest = Math.max(0, ...spread.map((row) => row.sdS ?? 0));
	return spread.map((row) => ({
		corner: row.corner,
		name: corners.find((corner) => corner.number === row.corner)?.name ?? null,
		bestS: row.bestS,
		medianGapS: row.bestS === null || row.medianS === null ? null : row.medianS - row.bestS,
		sdS: row.sdS,
		share: row.sdS === null || widest === 0 ? 0 : row.sdS / widest,
		minKmhBest: row.minKmhBest,
		minKmhMedian: row.minKmhMedian,
		bestLapNumber: laps.find((lap) => lap.id === row.bestLapId)?.number ?? null
	}));
}

/** The corner that varies most, where it stands out enough to be said; null where no spread is known. */
export function leastEven(rows: readonly SpreadRow[]) {
	const known = rows.filter((row) => row.sdS !== null);
	if (known.length < 2) return null;
	return known.reduce((worst, row) => ((row.sdS ?? 0) > (worst.sdS ?? 0) ? row : worst));
}
