import { MINUS, NO_BREAK_SPACE, NOT_KNOWN } from './signs.ts';

export interface NumberFormat {
	/** digits after the decimal point, 0–6 */
	decimals?: number;
	/** "+" before what is above zero */
	signed?: boolean;
}

/**
 * A number in the house's setting: decimal point, groups of three from four digits on, real minus, no "−0".
 * What is not finite, null or undefined becomes "–".
 *
 * @example formatNumber(-1535.25, { decimals: 1 }) // => "−1 535.3"
 */
export function formatNumber(value: number | null | undefined, { decimals = 0, signed = false }: NumberFormat = {}) {
	if (value === null || value === undefined || !Number.isFinite(value)) return NOT_KNOWN;
	const digits = Math.abs(value).toFixed(decimals);
	const isZero = Number(digits) === 0;
	const sign = isZero ? '' : value < 0 ? MINUS : signed ? '+' : '';
	const [whole, fraction] = digits.split('.');
	const grouped = whole.replace(/\B(?=(\d{3})+(?!\d))/g, NO_BREAK_SPACE);
	return sign + grouped + (fraction === undefined ? '' : `.${fraction}`);
}
