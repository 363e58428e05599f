import { KMH_PER_MPS } from '../../units.ts';
import type { Channels } from '../model.ts';

/**
 * Way driven from one sample to a later one, by trapezoids over the speed; where speed is missing, by the distance channel.
 *
 * @returns m, ≥ 0
 */
export function wayBetween({ speedKmh, timeS, distanceM }: Channels, from: number, to: number): number {
	let way = 0;
	for (let i = from; i < to; i++) {
		const step = ((speedKmh[i] + speedKmh[i + 1]) / (2 * KMH_PER_MPS)) * (timeS[i + 1] - timeS[i]);
		way += step >= 0 ? step : Math.max(distanceM[i + 1] - distanceM[i], 0) || 0;
	}
	return way;
}

/**
 * Time in which a way was driven before a sample, when speed changes evenly over the step before it. The way may reach
 * somewhat further back than the step.
 *
 * With v at the sample and a over the step: way = v·τ − a·τ²/2, solved for τ in the form that stays exact for a ≈ 0.
 *
 * @returns s, ≥ 0
 */
export function timeBack({ speedKmh, timeS }: Channels, sample: number, wayM: number): number {
	if (!(wayM > 0)) return 0;
	const v1 = speedKmh[sample] / KMH_PER_MPS;
	const v0 = (sample > 0 ? speedKmh[sample - 1] : speedKmh[sample]) / KMH_PER_MPS;
	const dt = sample > 0 ? timeS[sample] - timeS[sample - 1] : 1;
	const acceleration = (v1 - v0) / dt || 0;
	const root = v1 + Math.sqrt(Math.max(v1 * v1 - 2 * acceleration * wayM, 0));
	return root > 0 ? (2 * wayM) / root : 0;
}
