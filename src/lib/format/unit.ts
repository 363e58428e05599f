import { formatNumber, type NumberFormat } from './number.ts';
import { NO_BREAK_SPACE, NOT_KNOWN } from './signs.ts';

/**
 * A number with its unit, held together by a no-break space; "°" stands close. What is not known stays "–", without a unit.
 *
 * @example formatUnit(75, '%') // => "75 %"
 */
export function formatUnit(value: number | null | undefined, unit: string, format: NumberFormat = {}) {
	const text = formatNumber(value, format);
	if (text === NOT_KNOWN || unit === '') return text;
	return unit === '°' ? text + unit : text + NO_BREAK_SPACE + unit;
}
