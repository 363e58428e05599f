import { formatNumber } from './number.ts';
import { NO_BREAK_SPACE } from './signs.ts';

const WORDS = 'no one two three four five six seven eight nine ten eleven twelve'.split(' ');

/** A count in words up to twelve, in figures above: "nine", "31". Zero is "no", as in "no laps". */
export function countInWords(count: number) {
	return WORDS[count] ?? formatNumber(count);
}

/**
 * A count with its noun: "one lap", "nine laps", "31 columns", "no runs".
 *
 * @param plural only where it is not the noun with "s"
 */
export function countOf(count: number, noun: string, plural = `${noun}s`) {
	return `${countInWords(count)} ${count === 1 ? noun : plural}`;
}

/** As countOf, in figures throughout, for tables and dense lines: "1 run", "6 runs". */
export function figureOf(count: number, noun: string, plural = `${noun}s`) {
	return `${formatNumber(count)}${NO_BREAK_SPACE}${count === 1 ? noun : plural}`;
}

/** First letter large, the rest as it stands. */
export function capitalise(text: string) {
	return text.charAt(0).toUpperCase() + text.slice(1);
}

/** A list in words: "4, 8 and 6". */
export function listInWords(items: readonly string[]) {
	if (items.length < 2) return items.join('');
	return `${items.slice(0, -1).join(', ')} and ${items[items.length - 1]}`;
}
