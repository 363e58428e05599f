import type { Knex } from 'knex';
import type { LapHead, PairSuggestion } from '../../schemas/views.ts';
import { seenOwners } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { listFoundLaps, seenLaps, toLapHead, type FoundLap } from '../db/lapRepository.ts';

/** More than anybody scrolls through; the rest is found through the runs. */
const MOST_CANDIDATES = 24;
const MOST_SHELVED = 200;

/** What the laps are to be laid on: a layout's path and corners as they were when the laps were analysed. */
export interface ReferencePlace {
	layoutId: number;
	pathVersion: number;
	mapVersion: number;
	/** laps of this car come first */
	carId: number | null;
}

/**
 * Laps on the layout that the viewer may see and that may stand as reference, best candidates first: laps on a shelf, then
 * the best lap of each run by time; within each, the same car before others.
 */
export async function listReferences(db: Knex, viewer: Viewer, place: ReferencePlace): Promise<FoundLap[]> {
	const onLayout = () =>
		seenLaps(db, viewer)
			.where('runs.layout_id', place.layoutId)
			.where('analyses.path_version', place.pathVersion)
			.where('analyses.map_version', place.mapVersion)
			.where('laps.kind', 'timed')
			.whereNotNull('laps.grid_length_m')
			.orderByRaw('runs.car_id <=> ? DESC', [place.carId])
			.orderBy('laps.time_us')
			.limit(MOST_CANDIDATES);
	const owners = await seenOwners(db, viewer);
	const shelved = await listShelved(db, viewer, place.layoutId, owners);
	const [onShelf, best] = await Promise.all([
		shelved.length === 0 ? [] : listFoundLaps(onLayout().whereIn('laps.id', shelved)),
		listFoundLaps(onLayout().whereIn('runs.owner_id', owners).whereRaw('laps.id = runs.best_lap_id'))
	]);
	const shelf = onShelf.filter(({ shelf_name }) => shelf_name !== null);
	const known = new Set(shelf.map(({ lap_id }) => lap_id));
	return [...shelf, ...best.filter(({ lap_id }) => !known.has(lap_id))];
}

/** Laps of the layout that stand on a shelf the viewer knows: of a person whose laps they see, or of their organisations. */
async function listShelved(db: Knex, viewer: Viewer, layoutId: number, owners: readonly number[]): Promise<number[]> {
	const organisations = viewer.memberships.map(({ organisationId }) => organisationId);
	const standing = () =>
		db('shelf_references')
			.where({ layout_id: layoutId })
			.whereNull('removed_at')
			.select<{ lap_id: number }[]>('lap_id')
			.limit(MOST_SHELVED);
	// Two questions, for each has an index of its own.
	const [ofPeople, ofOrganisations] = await Promise.all([
		standing().whereIn('person_id', owners),
		organisations.length === 0 ? [] : standing().whereIn('organisation_id', organisations)
	]);
	return [...new Set([...ofPeople, ...ofOrganisations].map(({ lap_id }) => lap_id))];
}

/**
 * The pair to look at first: the run's best clean lap (else its fastest timed one) against the best that somebody else shows
 * on this layout, else against the driver's own best, else the run's usual lap against its best.
 *
 * @param runLaps timed laps of one run
 * @param references as `listReferences` gave them
 * @returns null when there is nothing to lay it on
 */
export function suggestPair(
	viewer: Viewer,
	runLaps: readonly FoundLap[],
	references: readonly FoundLap[]
): PairSuggestion | null {
	const gridded = runLaps.filter(({ kind, grid_length_m }) => kind === 'timed' && grid_length_m !== null);
	const clean = gridded.filter(({ is_clean }) => is_clean === 1);
	const ranked = [...(clean.length > 0 ? clean : gridded)].sort((a, b) => a.time_us - b.time_us);
	const [best] = ranked;
	if (!best) return null;
	const pair = (lap: FoundLap, reference: FoundLap, why: PairSuggestion['why']): PairSuggestion => ({
		lap: toLapHead(lap, viewer),
		reference: toLapHead(reference, viewer),
		why
	});
	const others = references.filter(({ run_id, is_clean }) => run_id !== best.run_id && is_clean === 1);
	const sameCar = (lap: FoundLap) => lap.car_id === best.car_id;
	const shelved = others.filter(({ shelf_name }) => shelf_name !== null);
	const onShelf = shelved.find(sameCar) ?? shelved[0];
	if (onShelf) return pair(best, onShelf, 'coach_shelf');
	const quicker = others.filter(({ owner_id, time_us }) => owner_id !== best.owner_id && time_us < best.time_us);
	const shared = quicker.find(sameCar) ?? quicker[0];
	if (shared) return pair(best, shared, 'shared_best');
	const own = others.filter(({ owner_id }) => owner_id === best.owner_id);
	const ownQuicker = own.find((lap) => sameCar(lap) && lap.time_us < best.time_us);
	if (ownQuicker) return pair(best, ownQuicker, 'own_best');
	const usual = ranked[Math.floor(ranked.length / 2)];
	if (usual !== best) return pair(usual, best, 'own_second');
	const earlier = own.find(sameCar) ?? own[0];
	return earlier ? pair(best, earlier, 'own_earlier') : null;
}

export function toHeads(laps: readonly FoundLap[], viewer: Viewer): LapHead[] {
	return laps.map((lap) => toLapHead(lap, viewer));
}
