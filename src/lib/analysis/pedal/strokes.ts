/** A turn of the input smaller than this share of its range is noise, not a new stroke. */
const LEAST_TURN = 0.04;

export interface Strokes {
	/** per sample: 1 pressing, −1 releasing, 0 before anything moved */
	direction: Int8Array;
	/** how often the pedal was pressed */
	presses: number;
}

/**
 * Tells pressing from releasing: the input is followed from turn to turn, a turn being a way back of more than 4 % of the range.
 *
 * @param input in the order of time, all finite
 */
export function findStrokes(input: ArrayLike<number>): Strokes {
	const n = input.length;
	const direction = new Int8Array(n);
	let [low, high] = [Infinity, -Infinity];
	for (let i = 0; i < n; i++) [low, high] = [Math.min(low, input[i]), Math.max(high, input[i])];
	const turn = LEAST_TURN * (high - low);
	if (!(turn > 0)) return { direction, presses: 0 };
	let going = 0;
	let [lowest, highest] = [0, 0];
	let presses = 0;
	let from = 0;
	const close = (end: number, way: number) => {
		direction.fill(way, from, end + 1);
		from = end + 1;
		if (way > 0) presses++;
	};
	for (let i = 0; i < n; i++) {
		if (input[i] > input[highest]) highest = i;
		if (input[i] < input[lowest]) lowest = i;
		if (going <= 0 && input[i] > input[lowest] + turn) {
			if (lowest >= from) close(lowest, going);
			going = 1;
			highest = i;
		} else if (going >= 0 && input[i] < input[highest] - turn) {
			if (highest >= from) close(highest, going);
			going = -1;
			lowest = i;
		}
	}
	if (from < n) close(n - 1, going);
	return { direction, presses };
}
