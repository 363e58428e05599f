import type { CornerMetrics, LedgerRow } from '../schemas/analysisDocument.ts';
import type { ComparisonView, CornerView } from '../schemas/views.ts';

/** Everything about one corner that has a place, unwrapped: a corner that spans the line has places below 0 or above the length. */
export interface PlacedCorner {
	startM: number;
	apexM: number;
	endM: number;
	/** the reference's, else the corner's start */
	turnInM: number;
	driver: CornerMetrics | null;
	reference: CornerMetrics | null;
	ledger: LedgerRow;
	/** m: entry, mid and exit begin here, and the row ends; whole where the ledger's row is whole */
	spans: { entryM: number; midM: number; exitM: number; endM: number };
	/** earlier of the two onsets, else lifts, else where the entry begins */
	beginM: number;
}

/**
 * Puts a place of a closed layout where it lies nearest to another, so that a corner is one stretch without a seam.
 *
 * @param lengthM of the layout; an open one never wraps
 */
export function nearestTurn(placeM: number, aroundM: number, lengthM: number, closed = true): number {
	return closed ? placeM + Math.round((aroundM - placeM) / lengthM) * lengthM : placeM;
}

/**
 * Gathers the places of a corner about its apex.
 *
 * @returns null where the layout has no such numbered corner
 */
export function placedCorner(view: ComparisonView, corner: number): PlacedCorner | null {
	const found = view.corners.find((c): c is CornerView => c.number === corner);
	const ledger = view.comparison.ledger.find((row) => row.corner === corner);
	if (!found || !ledger) return null;
	const { lengthM, closed } = view.path;
	const near = (placeM: number): number => nearestTurn(placeM, found.apexM, lengthM, closed);
	const byCorner = (metrics: CornerMetrics[]): CornerMetrics | null => {
		const row = metrics.find((m) => m.corner === corner);
		return row ? unwrapped(row, near) : null;
	};
	const driver = byCorner(view.driverMetrics);
	const reference = byCorner(view.referenceMetrics);
	const startM = near(found.startM);
	const begins = [driver, reference]
		.map((m) => m?.onsetM ?? m?.liftM ?? null)
		.filter((place): place is number => place !== null);
	return {
		startM,
		apexM: found.apexM,
		endM: near(found.endM),
		turnInM: reference?.turnInM ?? startM,
		driver,
		reference,
		ledger,
		spans: { entryM: ledger.entryM, midM: ledger.midM, exitM: ledger.exitM, endM: ledger.endM },
		beginM: begins.length > 0 ? Math.min(...begins) : Math.min(ledger.entryM, startM)
	};
}

function unwrapped(metrics: CornerMetrics, near: (placeM: number) => number): CornerMetrics {
	const put = (placeM: number | null): number | null => (placeM === null ? null : near(placeM));
	return {
		...metrics,
		onsetM: put(metrics.onsetM),
		peakM: put(metrics.peakM),
		releaseStartM: put(metrics.releaseStartM),
		releaseEndM: put(metrics.releaseEndM),
		turnInM: put(metrics.turnInM),
		minSpeedM: put(metrics.minSpeedM),
		liftM: put(metrics.liftM),
		pickUpM: put(metrics.pickUpM),
		fullThrottleM: put(metrics.fullThrottleM)
	};
}
