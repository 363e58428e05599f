import { KerbnoteError } from '../../schemas/kerbnoteError.ts';
import type { Lap } from '../model.ts';

export interface ChosenLap {
	lap: Lap;
	/** is it only the fastest timed lap, since none is clean */
	noneClean: boolean;
}

/**
 * The lap that stands for a run: the one asked for, else the best clean lap, else the fastest timed one.
 *
 * @param wanted number of the lap, or undefined
 * @param name   whose lap it is, for the message
 * @returns null where none is asked for and the run holds no timed lap
 * @throws {KerbnoteError} `no_such_lap` where the lap asked for is not there or not timed
 */
export function chooseLap(laps: readonly Lap[], wanted: number | undefined, name: string): ChosenLap | null {
	const timed = laps.filter((lap) => lap.kind === 'timed');
	if (wanted !== undefined) {
		const lap = timed.find(({ number }) => number === wanted);
		if (lap) return { lap, noneClean: false };
		const other = laps.find(({ number }) => number === wanted);
		const numbers = timed.map(({ number }) => number).join(', ');
		throw new KerbnoteError(
			'no_such_lap',
			other
				? `${name} requires a timed lap, got lap ${wanted}, which is not complete`
				: `${name} requires a lap of the file, got ${wanted}`,
			numbers ? `Choose one of the timed laps: ${numbers}.` : 'The file holds no timed lap; record a full one.'
		);
	}
	const quickest = (candidates: Lap[]) =>
		candidates.reduce<Lap | null>((best, lap) => {
			return best && best.endS - best.startS <= lap.endS - lap.startS ? best : lap;
		}, null);
	const clean = quickest(timed.filter((lap) => lap.clean));
	if (clean) return { lap: clean, noneClean: false };
	const fastest = quickest(timed);
	return fastest && { lap: fastest, noneClean: true };
}
