import type { MapCorner } from '../../schemas/cornerMap.ts';
import type { MapPath } from './editCornerMap.ts';
import { secondsBetween } from './mapGeometry.ts';

/** In less time than this nobody is at full throttle for longer than 0.7 s, so that such corners are linked for sure. */
const SURELY_LINKED_S = 0.7;

/**
 * Numbers corners from the line by apex and says which are linked. Two that followed each other before the edit stay as they were; of
 * two new neighbours the throttle between them is not known here, so that only those close together are linked.
 *
 * @param corners in order of apex; a number other than null marks a corner
 * @param before  the map that was edited
 */
export function numberAndLink(corners: readonly MapCorner[], before: readonly MapCorner[], path: MapPath): MapCorner[] {
	const numbered = corners.filter(({ number }) => number !== null);
	const wasBefore = followers(before);
	return corners.map((corner) => {
		const index = numbered.indexOf(corner);
		if (index < 0) return { ...corner, linkedTo: null };
		const next = numbered[index + 1];
		const known = next && wasBefore.get(corner.id)?.id === next.id ? wasBefore.get(corner.id)?.linked : undefined;
		// a chain is not carried over the line: laps are compared from line to line
		const linked = next && (known ?? secondsBetween(corner.endM, next.startM, path) < SURELY_LINKED_S);
		return { ...corner, number: index + 1, linkedTo: linked ? index + 2 : null };
	});
}

function followers(corners: readonly MapCorner[]): Map<string, { id: string; linked: boolean }> {
	const numbered = corners.filter(({ number }) => number !== null);
	return new Map(
		numbered.slice(0, -1).map((corner, i) => [corner.id, { id: numbered[i + 1].id, linked: corner.linkedTo !== null }])
	);
}
