import { NOT_KNOWN } from './signs.ts';

/**
 * A lap time as it is said at a circuit: minutes always, hours where there are any, three decimals unless told otherwise.
 * Rounds once, so that 59.9996 s is "1:00.000" and never "0:60.000".
 *
 * @param timeS s, ≥ 0; null, NaN and negative become "–"
 * @example formatLapTime(98.947) // => "1:38.947"
 */
export function formatLapTime(timeS: number | null | undefined, decimals = 3) {
	if (timeS === null || timeS === undefined || !(timeS >= 0) || !Number.isFinite(timeS)) return NOT_KNOWN;
	const scale = 10 ** decimals;
	const ticks = Math.round(timeS * scale);
	const seconds = (ticks % (60 * scale)) / scale;
	const minutes = Math.floor(ticks / (60 * scale));
	const secondsText = seconds.toFixed(decimals).padStart(decimals > 0 ? decimals + 3 : 2, '0');
	if (minutes < 60) return `${minutes}:${secondsText}`;
	return `${Math.floor(minutes / 60)}:${String(minutes % 60).padStart(2, '0')}:${secondsText}`;
}
