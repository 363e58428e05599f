/** An instant as a field for date and time holds it, in UTC as everywhere on the pages: "2026-05-14T16:05"; "" for none. */
export function momentInField(instant: string | null): string {
	return instant === null ? '' : new Date(instant).toISOString().slice(0, 16);
}

/** The instant that a field for date and time holds; null for none and for what is no date. */
export function momentFromField(field: string): string | null {
	const time = Date.parse(`${field}Z`);
	return Number.isNaN(time) ? null : new Date(time).toISOString();
}
