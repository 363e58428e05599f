const ANGLE =
	/^([NSEWO])?\s*([+-])?(\d+(?:[.,]\d+)?)\s*(?:°|º|deg|d|:| )?\s*(?:(\d+(?:[.,]\d+)?)\s*(?:'|’|′|min|m|:| )?\s*(?:(\d+(?:[.,]\d+)?)\s*(?:"|”|″|''|sec)?)?)?\s*,?\s*([NSEWO])?$/i;

/** Longer text is no position; it bounds what the pattern has to go through. */
const MAX_ANGLE = 50;

/**
 * Reads a latitude or longitude with degree signs, minutes, seconds or hemisphere letters:
 * 38°54.00017'N · N 38 54 0.01 · 3854.00017N (degrees and minutes run together, as satellite sentences have it) · -33.69929.
 * O is west, as in French, Spanish and Italian.
 *
 * @returns degrees, north and east positive; NaN for an empty cell, undefined where the text is none
 * @example readAngle("033°42.06609'W") // => -33.7011015
 */
export function readAngle(text: string): number | undefined {
	const cell = text.trim().replace(/[\u2212\u2013\uff0d]/g, '-');
	if (cell === '') return NaN;
	const match = cell.length > MAX_ANGLE ? null : ANGLE.exec(cell);
	if (!match) return undefined;
	const [degrees, minutes, seconds] = [match[3], match[4] ?? '0', match[5] ?? '0'].map((part) =>
		Number(part.replace(',', '.'))
	);
	const letter = (match[6] ?? match[1] ?? '').toUpperCase();
	let size = degrees + minutes / 60 + seconds / 3600;
	if (match[4] === undefined && degrees > 180) {
		// dddmm.mmmm
		const whole = Math.floor(degrees / 100);
		size = whole + (degrees - whole * 100) / 60;
	}
	return match[2] === '-' || letter === 'S' || letter === 'W' || letter === 'O' ? -size : size;
}
