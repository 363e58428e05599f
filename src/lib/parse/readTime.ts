/** How a time is written in a file. */
export type TimeForm = 'number' | 'clock' | 'date';

const CLOCK = /^(-)?(?:(\d{1,3})[:h]\s*)?(\d{1,3})[:m'’]\s*(\d{1,2})(?:["”s]?[.,:]?(\d+))?["”s]?\s*([ap]\.?m\.?)?$/i;
const DATE =
	/^(\d{4})[-/.]?(\d{2})[-/.]?(\d{2})[T\s_]+(\d{1,2})[:.]?(\d{2})(?:[:.]?(\d{2})(?:[.,:](\d+))?)?\s*(Z|UTC|GMT|[+-]\d{2}(?::?\d{2})?)?$/i;
const LOCAL_DATE = /^(\d{1,2})[./-](\d{1,2})[./-](\d{2,4})[T\s]+(.+)$/;

/** Longer text is no time. */
const MAX_TIME = 60;
const SECONDS_PER_DAY = 86_400;

/**
 * Reads a clock time or a stop-watch time: h:mm:ss.sss, m:ss.sss, m'ss"sss, a comma as decimal sign, am/pm, or plain seconds.
 *
 * @returns s, undefined where the text is none
 * @example readClock('3:02:05.037') // => 10925.037
 */
export function readClock(text: string): number | undefined {
	const cell = text.trim();
	const plain = Number(cell.replace(',', '.'));
	if (cell !== '' && Number.isFinite(plain)) return plain;
	const match = cell.length > MAX_TIME ? null : CLOCK.exec(cell);
	if (!match) return undefined;
	const [, sign, hours, minutes, seconds, fraction, half] = match;
	let hour = Number(hours ?? 0);
	let minute = Number(minutes);
	let second = Number(seconds);
	// hh:mm without seconds cannot be told from m:ss; a stop-watch reading is what lap files hold.
	if (half) {
		if (hours === undefined) [hour, minute, second] = [minute, second, 0];
		hour = (hour % 12) + (/^p/i.test(half) ? 12 : 0);
	}
	if (second >= 61 || (hours !== undefined && minute >= 60)) return undefined;
	const value = hour * 3600 + minute * 60 + second + (fraction ? Number(`0.${fraction}`) : 0);
	return sign ? -value : value;
}

/**
 * Reads a date with a time: ISO 8601 (extended or basic, with or without offset), or day-month-year with a clock time.
 *
 * @returns `epochS` s since 1970 UTC (local time counts as UTC where no offset is given) and whether the offset was given
 * @example readDate('2026-05-17T18:04:11.037+02:00')?.epochS // => 1779033851.037
 */
export function readDate(text: string): { epochS: number; zoned: boolean } | undefined {
	const cell = text.trim();
	if (cell.length > MAX_TIME) return undefined;
	const match = DATE.exec(cell);
	if (match) {
		const [, year, month, day, hour, minute, second, fraction, zone] = match;
		const date = Date.UTC(
			Number(year),
			Number(month) - 1,
			Number(day),
			Number(hour),
			Number(minute),
			Number(second ?? 0)
		);
		if (!Number.isFinite(date) || Number(month) > 12 || Number(hour) > 24) return undefined;
		return {
			epochS: date / 1000 - offsetS(zone) + (fraction ? Number(`0.${fraction}`) : 0),
			zoned: zone !== undefined
		};
	}
	const local = LOCAL_DATE.exec(cell);
	if (!local) return undefined;
	const clock = readClock(local[4]);
	if (clock === undefined) return undefined;
	const [first, second] = [Number(local[1]), Number(local[2])];
	const [day, month] = second > 12 ? [second, first] : [first, second];
	const year = Number(local[3]) + (local[3].length === 2 ? 2000 : 0);
	const midnight = Date.UTC(year, month - 1, day) / 1000;
	return Number.isFinite(midnight) ? { epochS: midnight + clock, zoned: false } : undefined;
}

function offsetS(zone: string | undefined): number {
	const match = zone && /^([+-])(\d{2}):?(\d{2})?$/.exec(zone);
	if (!match) return 0;
	const size = Number(match[2]) * 3600 + Number(match[3] ?? 0) * 60;
	return match[1] === '-' ? -size : size;
}

/** Which form a column's samples have: the form that reads most of them. */
export function timeForm(samples: readonly string[], isNumber: (text: string) => boolean): TimeForm {
	const filled = samples.filter((sample) => sample.trim() !== '');
	const count = (test: (text: string) => boolean) => filled.filter(test).length;
	const numbers = count(isNumber);
	const dates = count((text) => readDate(text) !== undefined);
	const clocks = count((text) => readClock(text) !== undefined);
	if (dates > numbers && dates >= clocks) return 'date';
	return clocks > numbers ? 'clock' : 'number';
}

export { SECONDS_PER_DAY };
