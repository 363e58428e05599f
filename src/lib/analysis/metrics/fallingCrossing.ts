import { crossing, type Moment, type Signal } from './crossing.ts';

/** How far around the crossing samples are looked at. */
const REACH_S = 0.3;

/**
 * When a noisy, falling signal goes below a level. The best falling course through the samples (isotonic regression by pooling
 * adjacent violators; Barlow et al. 1972, from memory) averages exactly as far as the noise demands; it is crossed instead of the
 * samples. Without noise this is `crossing`.
 *
 * @param i index of the last sample at or above the level
 * @param quickest see `crossing`
 */
export function fallingCrossing(signal: Signal, i: number, level: number, quickest: number | null = null): Moment {
	const { timeS, values, noise } = signal;
	const plain = crossing(signal, i, level, quickest);
	if (!(noise > 0) || values[i] - values[i + 1] > 6 * noise) return plain;
	let from = i;
	while (from > 0 && timeS[i] - timeS[from - 1] <= REACH_S && values[from - 1] >= values[i] - 6 * noise) from--;
	let to = i + 1;
	while (to + 1 < values.length && timeS[to + 1] - timeS[i] <= REACH_S && values[to + 1] < level + 3 * noise) to++;
	const blocks = poolFalling(timeS, values, from, to);
	for (let k = 1; k < blocks.length; k++) {
		const { timeS: t0, value: v0 } = blocks[k - 1];
		const { timeS: t1, value: v1 } = blocks[k];
		if (v0 >= level && v1 < level) {
			const slope = (v0 - v1) / (t1 - t0);
			return { timeS: t0 + (v0 - level) / slope, plusMinusS: Math.max(plain.plusMinusS, noise / slope / 2) };
		}
	}
	return plain;
}

interface Block {
	timeS: number;
	value: number;
	count: number;
}

function poolFalling(timeS: Float64Array, values: Float64Array, from: number, to: number): Block[] {
	const blocks: Block[] = [];
	for (let i = from; i <= to; i++) {
		if (!Number.isFinite(values[i])) continue;
		let last: Block = { timeS: timeS[i], value: values[i], count: 1 };
		for (let top = blocks.at(-1); top && top.value <= last.value; top = blocks.at(-1)) {
			const count = top.count + last.count;
			last = {
				timeS: (top.timeS * top.count + last.timeS * last.count) / count,
				value: (top.value * top.count + last.value * last.count) / count,
				count
			};
			blocks.pop();
		}
		blocks.push(last);
	}
	return blocks;
}
