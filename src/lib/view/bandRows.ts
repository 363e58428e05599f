/** Room that a number over a band keeps for itself as a target, px. */
const ROOM_PX = 27;

/**
 * Lines on which numbers stand over a plot, so that none comes nearer to another than a target's width: each takes the highest
 * line with room.
 *
 * @param shares centre of each number across the plot, 0–1, increasing
 * @param plotPx width of the plot
 * @returns the line of each, from 0
 * @example bandRows([0.1, 0.12, 0.5], 330) // => [0, 1, 0]
 */
export function bandRows(shares: readonly number[], plotPx: number): number[] {
	const lastPx: number[] = [];
	return shares.map((share) => {
		const px = share * plotPx;
		const free = lastPx.findIndex((last) => px - last >= ROOM_PX);
		const row = free < 0 ? lastPx.length : free;
		lastPx[row] = px;
		return row;
	});
}
