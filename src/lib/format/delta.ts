import { formatNumber } from './number.ts';
import { NO_BREAK_SPACE, NOT_KNOWN } from './signs.ts';

export type DeltaWord = 'lost' | 'found' | 'level';

/**
 * Which side a time delta (driver minus reference) falls on, as it will be printed: what rounds to zero is level.
 *
 * @param deltaS s, positive is lost
 */
export function deltaWord(deltaS: number, decimals = 3): DeltaWord {
	const rounded = Number(deltaS.toFixed(decimals));
	return rounded > 0 ? 'lost' : rounded < 0 ? 'found' : 'level';
}

/** The figure alone, with its sign and without unit: "+0.312", "−0.047", "0.000". */
export function formatSignedSeconds(deltaS: number | null | undefined, decimals = 3) {
	return formatNumber(deltaS, { decimals, signed: true });
}

/**
 * A time delta with sign, unit and word, so that colour is never the only difference.
 *
 * @example formatDelta(0.312) // => "+0.312 s lost"
 */
export function formatDelta(deltaS: number | null | undefined, decimals = 3) {
	if (deltaS === null || deltaS === undefined || !Number.isFinite(deltaS)) return NOT_KNOWN;
	const space = NO_BREAK_SPACE;
	return `${formatSignedSeconds(deltaS, decimals)}${space}s${space}${deltaWord(deltaS, decimals)}`;
}
