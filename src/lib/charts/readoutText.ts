import { formatDelta } from '$lib/format/delta';
import { formatDistance } from '$lib/format/distance';
import { formatUnit } from '$lib/format/unit';
import type { CursorReading } from '$lib/view/cornerCard';
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
