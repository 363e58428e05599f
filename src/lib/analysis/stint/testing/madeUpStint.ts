import { seededNormal } from '../../metrics/testing/seededNormal.ts';
import type { RawStintLap } from '../chooseLaps.ts';

export interface MadeUpStint {
	laps?: number;
	baseS?: number;
	slope?: number;
	/** s per lap² */
	bend?: number;
	noiseS?: number;
	/** share of laps slowed by 0.6 … 5 % */
	traffic?: number;
	/** last laps fall off the cliff, s per lap each */
	cliff?: { fromLap: number; slope: number };
	/** laps of a slow phase */
	phase?: readonly [from: number, to: number];
	outIn?: boolean;
	seed: number;
}

/** A stint whose undisturbed laps are known. */
export function madeUpStint(stint: MadeUpStint): { laps: RawStintLap[]; clean: number[] } {
	const { laps = 26, baseS = 70.8, slope = 0.045, bend = 0, noiseS = 0.1, traffic = 0, cliff, phase } = stint;
	const { outIn = true, seed } = stint;
	const normal = seededNormal(seed);
	// normal numbers through their own distribution's slope: evenly spread enough for places and sizes
	const uniform = () => (1 + Math.sin(40 * normal())) / 2;
	const clean: number[] = [];
	const made = Array.from({ length: laps }, (_, i): RawStintLap => {
		const number = i + 1;
		const fallen = cliff && number > cliff.fromLap ? cliff.slope * (number - cliff.fromLap) : 0;
		const pace = baseS + slope * number + bend * number ** 2 + fallen + noiseS * normal();
		const disturbed = uniform() < traffic;
		const lost = baseS * (0.006 + 0.044 * uniform());
		const timeAt = (timeS: number): RawStintLap => ({ number, timeS: Math.round(1000 * timeS) / 1000, marked: null });
		if (outIn && i === 0) return timeAt(pace + 14);
		if (outIn && i === laps - 1) return timeAt(pace + 10);
		if (phase && number >= phase[0] && number <= phase[1]) return timeAt(1.42 * pace);
		if (disturbed) return timeAt(pace + lost);
		clean.push(number);
		return timeAt(pace);
	});
	return { laps: made, clean };
}
