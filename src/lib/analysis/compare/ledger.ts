import type { LedgerRow } from '../../schemas/analysisDocument.ts';
import type { CornerPlaces } from './cornerPlaces.ts';
import { deltaAt, type DeltaTrace } from './deltaTrace.ts';

/** Where a corner's entry, mid and exit begin, before they are held to the lap; unwrapped m. */
export interface CornerBorders {
	number: number;
	entryM: number;
	midM: number;
	exitM: number;
	cornerEndM: number;
}

/** the smallest of the places that are known, or null */
function earliest(...places: (number | null)[]): number | null {
	const known = places.filter((place) => place !== null);
	return known.length ? Math.min(...known) : null;
}

/**
 * Borders of a corner's spans: the entry begins at the earlier of the two onsets or lifts, and at the corner's start where
 * neither lap brakes or lifts; turn-in and corner end are the reference's; the mid ends at the earlier pick-up, held between
 * turn-in and corner end, at the apex where there is none.
 */
export function cornerBorders(place: CornerPlaces): CornerBorders {
	const { driver, reference, startM, apexM, endM } = place;
	// a turn-in comes before the apex, and not a whole corner's length before the corner
	const turnInM = Math.min(Math.max(reference.turnInM ?? startM, 2 * startM - endM), apexM);
	const begin = earliest(driver.onsetM, driver.liftM, reference.onsetM, reference.liftM) ?? startM;
	const pickUpM = earliest(driver.pickUpM, reference.pickUpM) ?? apexM;
	return {
		number: place.number,
		// a lift in mid-corner does not make the corner begin there
		entryM: Math.min(begin, turnInM),
		midM: turnInM,
		exitM: Math.min(Math.max(pickUpM, turnInM), endM),
		cornerEndM: endM
	};
}

/**
 * The time ledger: consecutive spans owned by corners, from the line to the line.
 *
 * Row 0 is the run-up from the line to the first entry. Borders are held to the lap and never run backwards, so every metre
 * belongs to exactly one span and the rows' totals sum to Δ at the line (within rounding, far below 1 µs).
 *
 * @param trace   Δ over the lap
 * @param corners borders in driving order
 */
export function cutLedger(trace: DeltaTrace, corners: readonly CornerBorders[]): LedgerRow[] {
	const { lengthM } = trace;
	let reached = 0;
	const forward = (placeM: number): number => (reached = Math.min(Math.max(placeM, reached), lengthM));
	const cut = corners.map((corner) => ({
		corner,
		entryM: forward(corner.entryM),
		midM: forward(corner.midM),
		exitM: forward(corner.exitM)
	}));
	const firstM = cut.length ? cut[0].entryM : lengthM;
	const runUpS = deltaAt(trace, firstM) - deltaAt(trace, 0);
	const rows: LedgerRow[] = [
		{
			corner: 0,
			entryS: runUpS,
			midS: 0,
			exitS: 0,
			straightS: 0,
			totalS: runUpS,
			entryM: 0,
			midM: firstM,
			exitM: firstM,
			endM: firstM
		}
	];
	cut.forEach(({ corner, entryM, midM, exitM }, i) => {
		const endM = i + 1 < cut.length ? cut[i + 1].entryM : lengthM;
		const straightM = Math.min(Math.max(corner.cornerEndM, exitM), endM);
		const entryS = deltaAt(trace, midM) - deltaAt(trace, entryM);
		const midS = deltaAt(trace, exitM) - deltaAt(trace, midM);
		const exitS = deltaAt(trace, endM) - deltaAt(trace, exitM);
		const straightS = deltaAt(trace, endM) - deltaAt(trace, straightM);
		rows.push({
			corner: corner.number,
			entryS,
			midS,
			exitS,
			straightS,
			totalS: entryS + midS + exitS,
			entryM,
			midM,
			exitM,
			endM
		});
	});
	return rows;
}
