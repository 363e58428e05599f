import type { Cell } from '../../schemas/analysisDocument.ts';
import type { CornerChange, MapCorner } from '../../schemas/cornerMap.ts';

/** A border that moved by less than this cuts no lap differently. */
const SAME_PLACE_M = 0.01;

/**
 * What an edit changes: corners that are new, gone, moved, renumbered or renamed, and those whose numbers are measured anew. Brake and lift
 * of a corner are looked for from the corner before on, so that a moved corner's neighbours are measured anew too.
 */
export function changesOf(before: readonly MapCorner[], after: readonly MapCorner[]): CornerChange[] {
	const ids = new Set([...before, ...after].map(({ id }) => id));
	const at = (corners: readonly MapCorner[], id: string) => corners.find((corner) => corner.id === id) ?? null;
	const moved = new Set([...ids].filter((id) => placesDiffer(at(before, id), at(after, id))));
	const touched = new Set([...moved].flatMap((id) => [...neighboursOf(before, id), ...neighboursOf(after, id)]));
	return [...ids].flatMap((id): CornerChange[] => {
		const [old, now] = [at(before, id), at(after, id)];
		const remeasured = now?.number != null && (moved.has(id) || touched.has(id));
		const same = old && now && !moved.has(id) && old.number === now.number && old.name === now.name;
		return same && !remeasured ? [] : [{ id, before: old, after: now, remeasured }];
	});
}

/** Do the cells cut laps differently? */
export function cellsDiffer(before: readonly Cell[], after: readonly Cell[]): boolean {
	return (
		before.length !== after.length ||
		before.some(
			(cell, i) =>
				Math.abs(cell.startM - after[i].startM) > SAME_PLACE_M || Math.abs(cell.endM - after[i].endM) > SAME_PLACE_M
		)
	);
}

function placesDiffer(a: MapCorner | null, b: MapCorner | null): boolean {
	if (!a || !b) return true;
	const away = (x: number | null, y: number | null) =>
		x === null || y === null ? x !== y : Math.abs(x - y) > SAME_PLACE_M;
	return (
		away(a.startM, b.startM) ||
		away(a.apexM, b.apexM) ||
		away(a.apex2M, b.apex2M) ||
		away(a.endM, b.endM) ||
		(a.number === null) !== (b.number === null)
	);
}

function neighboursOf(corners: readonly MapCorner[], id: string): string[] {
	const numbered = corners.filter((corner) => corner.number !== null || corner.id === id);
	const at = numbered.findIndex((corner) => corner.id === id);
	if (at < 0 || numbered.length < 2) return [];
	return [-1, 1].map((step) => numbered[(at + step + numbered.length) % numbered.length].id);
}
