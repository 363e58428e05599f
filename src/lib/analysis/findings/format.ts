/** Numbers as sentences carry them: U+2212 for minus, a no-break space before the unit. */

const NO_BREAK_SPACE = '\u00a0';

/**
 * @example fixed(-1.25, 1) // => '−1.3'
 */
export function fixed(value: number, digits: number): string {
	const text = Math.abs(value).toFixed(digits);
	return value < 0 && Number(text) !== 0 ? `\u2212${text}` : text;
}

/** Digits for two values that a sentence sets side by side: as few as keep them apart. */
export function digitsFor(unit: string, driver: number | null, reference: number | null): number {
	const apart = driver !== null && reference !== null ? Math.abs(driver - reference) : Infinity;
	if (unit === 's') return apart < 0.25 ? 2 : 1;
	if (unit === 'm/s²') return 1;
	if (unit === '' || unit === '1/min' || unit === '°') return 0;
	return apart < 2 ? 1 : 0;
}

/** Value with its unit. */
export function withUnit(value: number, unit: string, digits: number): string {
	return unit === '' ? fixed(value, digits) : `${fixed(value, digits)}${NO_BREAK_SPACE}${unit}`;
}
