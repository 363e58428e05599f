const HEMISPHERE = /[NSEWOnsewo]/;
const PARTS =
	/(\d+(?:[.,]\d+)?)\s*(?:[°ºd:]|deg)?\s*(?:(\d+(?:[.,]\d+)?)\s*(?:['’′m:])?\s*)?(?:(\d+(?:[.,]\d+)?)\s*(?:["”″s]|'')?)?/;

/**
 * Reads a latitude or longitude with degree signs, minutes, seconds or hemisphere letters:
 * 38°54.00017'N · N 38 54 0.01 · 3854.00017,N (degrees and minutes run together, as satellite sentences have it) · -33.69929.
 *
 * @returns degrees, north and east positive; undefined where the text is none
 * @example readAngle("033°42.06609'W") // => -33.7011015
 */
export function readAngle(text: string): number | undefined {
	const cell = text.trim().replace(/[\u2212\u2013\uff0d]/g, '-');
	if (cell === '') return NaN;
	const letters = cell.replace(/deg|d|m|s$/gi, (word) => (/^[sS]$/.test(word) ? word : ' ')).match(/[NSEWOnsewo]/g);
	const letter = letters?.at(-1)?.toUpperCase() ?? '';
	const negative = cell.startsWith('-') || letter === 'S' || letter === 'W';
	const bare = cell.replace(/^[+-]/, '').replace(new RegExp(HEMISPHERE, 'g'), ' ').trim();
	const match = PARTS.exec(bare);
	if (!match || match.index !== 0 || /[a-z]/i.test(bare.slice(match[0].length))) return undefined;
	const [degrees, minutes, seconds] = [match[1], match[2] ?? '0', match[3] ?? '0'].map((part) =>
		Number(part.replace(',', '.'))
	);
	let value: number;
	if (match[2] === undefined && degrees > 180) {
		// dddmm.mmmm
		const whole = Math.floor(degrees / 100);
		value = whole + (degrees - whole * 100) / 60;
	} else value = degrees + minutes / 60 + seconds / 3600;
	return negative ? -value : value;
}
