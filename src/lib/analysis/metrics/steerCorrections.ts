import { sampleBefore } from '../trace/placeTime.ts';
import type { Signal } from './crossing.ts';

/** Hands that move back by less than this hold the wheel still. */
const LEAST_DEG = 6;
const NOISE_SD = 6;

/**
 * Corrections of the steering in a stretch: how often the hands give back angle and take it up again. Turning in and opening up once is
 * none.
 *
 * @param steering ° at the wheel, with its noise
 * @param fromS, toS turn-in and the corner's end
 * @returns null where the stretch has a gap
 */
export function steerCorrections(
	{ timeS, values, noise }: Signal,
	sign: 1 | -1,
	fromS: number,
	toS: number
): number | null {
	const first = Math.max(0, sampleBefore(timeS, fromS));
	const last = Math.min(timeS.length - 1, sampleBefore(timeS, toS));
	const least = Math.max(LEAST_DEG, NOISE_SD * noise);
	let corrections = 0;
	let turn = sign * values[first];
	let rising = true;
	for (let i = first; i <= last; i++) {
		const value = sign * values[i];
		if (Number.isNaN(value)) return null;
		if (rising ? value > turn : value < turn) turn = value;
		else if (rising && value < turn - least) {
			rising = false;
			turn = value;
		} else if (!rising && value > turn + least) {
			rising = true;
			turn = value;
			corrections++;
		}
	}
	return corrections;
}
