import { NO_BREAK_SPACE } from './signs.ts';

export interface DateFormat {
	/** BCP 47; day before month by default */
	locale?: string;
	/** IANA name; the server and the browser must use the same one, so it is never taken from the machine */
	timeZone?: string;
	/** the year is said only where it differs from this moment's year */
	now?: Date;
}

/**
 * A day as a person writes it in a notebook: "14 May", with the year where it is not this year's.
 * Day and month never part at a line's end.
 */
export function formatDay(date: Date | string, { locale = 'en-GB', timeZone = 'UTC', now }: DateFormat = {}) {
	const day = new Date(date);
	const year = (moment: Date) => new Intl.DateTimeFormat('en', { year: 'numeric', timeZone }).format(moment);
	const withYear = now === undefined || year(day) !== year(now);
	const format = new Intl.DateTimeFormat(locale, {
		day: 'numeric',
		month: 'long',
		...(withYear ? { year: 'numeric' } : {}),
		timeZone
	});
	return format.format(day).replaceAll(' ', NO_BREAK_SPACE);
}

/** A moment to the minute: "14 May, 16:05". */
export function formatMoment(date: Date | string, format: DateFormat = {}) {
	const { locale = 'en-GB', timeZone = 'UTC' } = format;
	const time = new Intl.DateTimeFormat(locale, { hour: '2-digit', minute: '2-digit', timeZone });
	return `${formatDay(date, format)}, ${time.format(new Date(date))}`;
}
