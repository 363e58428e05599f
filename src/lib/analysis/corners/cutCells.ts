import type { Cell, Corner } from '../../schemas/analysisDocument.ts';

/** A border lies this far before the earliest usual onset, so that a braking a little earlier still falls into its own cell. */
const BEFORE_ONSET_M = 10;
/** Before a corner that nobody slows down for, the border lies at most this far ahead of it. */
const BEFORE_FLAT_M = 50;

/**
 * Cuts a lap into cells, one for each corner or linked chain: fixed borders for theoretical best, progress and consistency. A border
 * lies just before the earliest usual onset of its corner, but not before the last apex of the cell before; the last cell ends where
 * the first begins, so that the cells cover the lap once. Where that is across the line, endM is not above startM.
 *
 * @param corners     as found, in order; kinks do not count
 * @param usualOnsetM place where laps usually begin to brake or lift, by corner number, near the corner's apex (unwrapped)
 * @returns empty without corners
 */
export function cutCells(corners: Corner[], lengthM: number, usualOnsetM: Map<number, number>): Cell[] {
	const chains = chained(corners);
	if (chains.length === 0) return [];
	const borders = chains.map((chain, k) => {
		const [first] = chain;
		const before = chains[(k - 1 + chains.length) % chains.length];
		const last = before[before.length - 1];
		const startM = copyBefore(first.startM, first.apexM, lengthM);
		const lastApexM = copyBefore(last.apex2M ?? last.apexM, first.apexM, lengthM);
		const lastEndM = Math.max(copyBefore(last.endM, first.apexM, lengthM), lastApexM);
		const onsetM = first.number === null ? undefined : usualOnsetM.get(first.number);
		const wanted =
			onsetM === undefined ? Math.max((lastEndM + startM) / 2, startM - BEFORE_FLAT_M) : onsetM - BEFORE_ONSET_M;
		// a lone corner's cell is the whole lap, and its own apex no bound
		const least = chains.length > 1 ? lastApexM : -Infinity;
		return wrapped(Math.min(Math.max(wanted, least), startM), lengthM);
	});
	return chains.map((chain, k) => ({
		corners: chain.map(({ number }) => number).filter((number) => number !== null),
		startM: borders[k],
		endM: borders[(k + 1) % borders.length]
	}));
}

/** Numbered corners, those of a linked chain together. */
function chained(corners: Corner[]): Corner[][] {
	const chains: Corner[][] = [];
	let linked = false;
	for (const corner of corners) {
		if (corner.number === null) continue;
		if (linked) chains[chains.length - 1].push(corner);
		else chains.push([corner]);
		linked = corner.linkedTo !== null;
	}
	return chains;
}

/** A place's copy at or nearest before another place on a closed path. */
function copyBefore(placeM: number, referenceM: number, lengthM: number): number {
	return placeM - Math.ceil((placeM - referenceM) / lengthM) * lengthM;
}

function wrapped(placeM: number, lengthM: number): number {
	return placeM - Math.floor(placeM / lengthM) * lengthM;
}
