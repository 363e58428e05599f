export interface Box {
	x: number;
	y: number;
	width: number;
	height: number;
}

export interface LabelCandidate extends Box {
	/** what it costs to stand here rather than at the first choice, in points covered */
	penalty?: number;
}

export interface Surroundings {
	/** lines, as points close enough to stand for them */
	points: readonly (readonly [number, number])[];
	/** boxes that are taken already */
	boxes: readonly Box[];
	/** nothing may stand outside */
	frame: Box;
}

/** A box in the way counts as this many points of a line: text over text cannot be read, text over a line can. */
const BOX_COST = 60;
const OUTSIDE_COST = 120;

const overlap = (a: Box, b: Box): boolean =>
	a.x < b.x + b.width && b.x < a.x + a.width && a.y < b.y + b.height && b.y < a.y + a.height;

/**
 * Chooses where a label stands: the candidate that covers the least, the earlier one where two cover as much.
 *
 * @param candidates first choice first, never empty
 * @returns the chosen box and what it covers; a caller drops the label where that is too much
 */
export function placeLabel<T extends LabelCandidate>(
	candidates: readonly T[],
	around: Surroundings
): { chosen: T; cost: number } {
	let chosen = candidates[0];
	let least = Infinity;
	for (const candidate of candidates) {
		let cost = candidate.penalty ?? 0;
		for (const box of around.boxes) if (overlap(candidate, box)) cost += BOX_COST;
		for (const [x, y] of around.points) {
			if (x > candidate.x && x < candidate.x + candidate.width && y > candidate.y && y < candidate.y + candidate.height)
				cost++;
		}
		const { frame } = around;
		const inside =
			candidate.x >= frame.x &&
			candidate.y >= frame.y &&
			candidate.x + candidate.width <= frame.x + frame.width &&
			candidate.y + candidate.height <= frame.y + frame.height;
		if (!inside) cost += OUTSIDE_COST;
		if (cost < least) {
			least = cost;
			chosen = candidate;
		}
	}
	return { chosen, cost: least };
}
