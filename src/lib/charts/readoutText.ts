import { formatDelta } from '$lib/format/delta';
import { formatDistance } from '$lib/format/distance';
import { formatNumber } from '$lib/format/number';
import { formatUnit } from '$lib/format/unit';
import type { CursorReading } from '$lib/view/cornerCard';
import type { StretchFigures, StretchSide } from '$lib/view/stretchFigures';
import type { TraceRow } from '$lib/view/traceRows';

/** A place of the window as a place on the lap: the line is 0 again. */
export function placeOnLap(placeM: number, lengthM: number, closed: boolean): number {
	return closed ? ((placeM % lengthM) + lengthM) % lengthM : placeM;
}

/** One value under the cursor with its unit; "–" in a gap. */
export function readoutValue(row: Pick<TraceRow, 'valueUnit'>, value: number | null): string {
	return formatUnit(value, row.valueUnit);
}

/** What is read aloud when the cursor rests: place, each row's pair, and the time so far. */
export function readAloud(rows: readonly TraceRow[], reading: CursorReading, lengthM: number, closed: boolean): string {
	const pairs = rows
		.filter((row) => row.driver !== '' || row.reference !== '')
		.map((row) => {
			const mine = readoutValue(row, reading.driver[row.key]);
			const theirs = readoutValue(row, reading.reference[row.key]);
			return `${row.name.toLowerCase()} ${mine}, reference ${theirs}`;
		});
	const place = formatDistance(placeOnLap(reading.placeM, lengthM, closed));
	return [place, ...pairs, `time ${formatDelta(reading.deltaS)}`].join('; ');
}

/** "from 412 m to 455 m, 43 m": a stretch as places on the lap and its length. */
export function stretchPlaces(stretch: { fromM: number; toM: number }, lengthM: number, closed: boolean): string {
	const [from, to] = [stretch.fromM, stretch.toM].map((placeM) => formatDistance(placeOnLap(placeM, lengthM, closed)));
	return `from ${from} to ${to}, ${formatDistance(stretch.toM - stretch.fromM)}`;
}

/** What is read aloud when a stretch was marked: where, what it costs, and each channel’s means with their extremes. */
export function stretchAloud(
	rows: readonly TraceRow[],
	figures: StretchFigures,
	lengthM: number,
	closed: boolean
): string {
	const said = rows.flatMap((row) => {
		const found = figures.rows.find(({ key }) => key === row.key);
		const side = (values: StretchSide | null): string =>
			values === null
				? 'not known'
				: `${readoutValue(row, values.mean)}, ${formatNumber(values.lowest)} to ${formatNumber(values.highest)}`;
		return found && (found.driver || found.reference)
			? [`${row.name.toLowerCase()} mean ${side(found.driver)}; reference ${side(found.reference)}`]
			: [];
	});
	return [`Stretch ${stretchPlaces(figures, lengthM, closed)}: ${formatDelta(figures.deltaS)}`, ...said].join('; ');
}
