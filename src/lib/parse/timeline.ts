import type { Warning } from '../schemas/analysisDocument.ts';
import type { Column, Columns } from './columns.ts';
import { quantile, typicalStep } from './columns.ts';
import { SECONDS_PER_DAY } from './readTime.ts';

export interface Timeline {
	/** s, strictly increasing within a run; one entry per kept row */
	seconds: Float64Array;
	/** rows kept, in order; null: all of them */
	kept: Int32Array | null;
	/** positions in `seconds` where a new run begins, the first (0) left out */
	splits: number[];
	/** the column as it stood, where it restarts with each lap; one entry per row of the file */
	lapTimeS: Float64Array | null;
	/** rows at the end without a time */
	footerRows: number;
	warnings: Warning[];
}

/** A pause as long as this is not a drop-out in a lap but another outing. */
const NEW_RUN_GAP_S = 300;
/** So is a shorter one when the lap count or the distance begins anew after it. */
const NEW_RUN_RESTART_GAP_S = 30;
/** Share of repeated time stamps above which the clock is coarser than the sampling. */
const COARSE_SHARE = 0.3;
/** Rows that a logger may write twice or out of order before it is another recording. */
const MAX_OVERLAP_ROWS = 5000;

/**
 * Makes the time of a file run forward: drops repeated and overlapping rows, carries the clock over midnight and over restarts at
 * each lap, spreads stamps that are coarser than the sampling, and cuts the file into runs.
 *
 * @param seconds time of each row on the file's clock
 * @param columns the other columns: equal rows are told by them, and what kind of restart one is
 * @param options `isLapTime`: the header says that the time is one lap's
 */
export function buildTimeline(
	seconds: Float64Array,
	lines: Int32Array,
	columns: Columns,
	options: { isLapTime: boolean }
): Timeline {
	const footerRows = trailingWithoutTime(seconds);
	const length = seconds.length - footerRows;
	if (runsForward(seconds, length)) {
		const kept = footerRows > 0 ? Int32Array.from({ length }, (_, i) => i) : null;
		return {
			seconds: seconds.slice(0, length),
			kept,
			splits: [],
			lapTimeS: options.isLapTime ? seconds : null,
			footerRows,
			warnings: []
		};
	}
	const builder = new TimelineBuilder(seconds, lines, columns, options);
	return { ...builder.build(length), footerRows };
}

function trailingWithoutTime(seconds: Float64Array): number {
	let rows = 0;
	while (rows < seconds.length && !Number.isFinite(seconds[seconds.length - 1 - rows])) rows++;
	return rows;
}

function runsForward(seconds: Float64Array, length: number): boolean {
	if (!Number.isFinite(seconds[0])) return false;
	for (let i = 1; i < length; i++) {
		const step = seconds[i] - seconds[i - 1];
		if (!(step > 0 && step < NEW_RUN_RESTART_GAP_S)) return false;
	}
	return true;
}

/** A time of day that ends at 24 h and goes on at 0 h, whether written as a clock or in seconds. */
function isMidnight(before: number, after: number): boolean {
	return before > SECONDS_PER_DAY - 60 && before < SECONDS_PER_DAY && after >= 0 && after < 60;
}

class TimelineBuilder {
	readonly #raw: Float64Array;
	readonly #lines: Int32Array;
	readonly #columns: Columns;
	readonly #options: { isLapTime: boolean };
	readonly #step: number;
	readonly #times: number[] = [];
	readonly #kept: number[] = [];
	readonly #splits: number[] = [];
	readonly #notes = new Map<Warning['code'], { count: number; row: number; message: (count: number) => string }>();
	#offset = 0;
	#restarts = 0;

	constructor(raw: Float64Array, lines: Int32Array, columns: Columns, options: { isLapTime: boolean }) {
		this.#raw = raw;
		this.#lines = lines;
		this.#columns = columns;
		this.#options = options;
		this.#step = typicalStep(raw);
	}

	build(length: number): Omit<Timeline, 'footerRows'> {
		const coarse = this.#coarseStamps(length);
		const raw = coarse ?? this.#raw;
		for (let row = 0; row < length; row++) {
			const time = raw[row];
			if (!Number.isFinite(time)) {
				this.#warn(
					'bad_cell',
					row,
					(count) => `${count} ${count === 1 ? 'row' : 'rows'} without a readable time left out`
				);
				continue;
			}
			if (this.#kept.length === 0) this.#keep(row, time);
			else row = this.#place(raw, row, time, length);
		}
		const warnings = [...this.#notes].map(([code, { count, row, message }]): Warning => ({
			code,
			message: message(count),
			row
		}));
		return {
			seconds: Float64Array.from(this.#times),
			kept: Int32Array.from(this.#kept),
			splits: this.#splits,
			lapTimeS: this.#options.isLapTime || this.#restarts > 0 ? this.#raw : null,
			warnings
		};
	}

	/** Places a row that follows another; returns the last row dealt with. */
	#place(raw: Float64Array, row: number, time: number, length: number): number {
		const last = this.#times[this.#times.length - 1];
		const lastRow = this.#kept[this.#kept.length - 1];
		const gap = time + this.#offset - last;
		if (gap > 0) {
			if (gap > NEW_RUN_GAP_S || (gap > NEW_RUN_RESTART_GAP_S && this.#beginsAnew(lastRow, row)))
				this.#splitAt(row, time);
			else this.#keep(row, time);
			return row;
		}
		if (gap === 0 && this.#sameRow(lastRow, row)) {
			this.#warn('duplicate_rows', row, (count) => `${count} repeated ${count === 1 ? 'row' : 'rows'} left out`);
			return row;
		}
		if (isMidnight(raw[lastRow], time)) {
			this.#offset += SECONDS_PER_DAY;
			this.#keep(row, time);
			return row;
		}
		const overlap = this.#overlap(raw, row, last, length);
		if (overlap > 0) {
			for (let i = row; i < row + overlap; i++) {
				this.#warn(
					'overlap_removed',
					i,
					(count) => `${count} ${count === 1 ? 'row' : 'rows'} whose time had already passed left out`
				);
			}
			return row + overlap - 1;
		}
		if (this.#isLapRestart(lastRow, row)) {
			this.#restarts++;
			// The step across the line is the usual one: nothing in the file says otherwise.
			this.#offset = last + this.#step - time;
			this.#warn(
				'time_restarts',
				row,
				(count) => `time restarts ${count} ${count === 1 ? 'time' : 'times'}, with each lap, and was carried on`
			);
			this.#keep(row, time);
		} else this.#splitAt(row, time);
		return row;
	}

	#keep(row: number, time: number): void {
		this.#times.push(time + this.#offset);
		this.#kept.push(row);
	}

	#splitAt(row: number, time: number): void {
		this.#offset = 0;
		this.#splits.push(this.#kept.length);
		this.#keep(row, time);
	}

	/**
	 * Rows from `row` on whose time lies before what was reached: a buffer written twice or rows out of order, when time comes back to
	 * where it was after a few rows; 0 when this is a restart.
	 */
	#overlap(raw: Float64Array, row: number, last: number, length: number): number {
		const limit = Math.min(length, row + MAX_OVERLAP_ROWS);
		let rows = 0;
		while (row + rows < limit && !(raw[row + rows] + this.#offset > last)) rows++;
		if (row + rows >= limit && row + rows < length) return 0;
		const back = last - (raw[row] + this.#offset);
		// Time falls back by about as much as it then makes up; a restart never reaches the old time or does so a lap later.
		const twice = this.#writtenTwice(raw[row] + this.#offset, row);
		if (twice) return rows;
		return rows <= 3 || back <= 3 * this.#step ? rows : 0;
	}

	#writtenTwice(time: number, row: number): boolean {
		let low = this.#splits.at(-1) ?? 0;
		let high = this.#times.length - 1;
		const tolerance = this.#step * 0.01;
		while (low < high) {
			const middle = (low + high) >> 1;
			if (this.#times[middle] < time - tolerance) low = middle + 1;
			else high = middle;
		}
		return Math.abs(this.#times[low] - time) <= tolerance && this.#sameRow(this.#kept[low], row);
	}

	#sameRow(a: number, b: number): boolean {
		for (const column of this.#columns.values()) {
			if (column[a] !== column[b] && !(Number.isNaN(column[a]) && Number.isNaN(column[b]))) return false;
		}
		return true;
	}

	#isLapRestart(before: number, row: number): boolean {
		const lap = this.#columns.get('lap');
		if (lap && lap[row] < lap[before]) return false;
		if (this.#options.isLapTime) return true;
		// The whole run's clock counts several laps before it can restart with another run.
		if (lap && lap[row] > lap[before]) return !this.#lapsSinceSplit(lap, before);
		const distance = this.#columns.get('distance');
		if (distance && distance[row] > distance[before]) return true;
		return this.#movesOn(before, row);
	}

	#lapsSinceSplit(lap: Column, before: number): boolean {
		if (this.#restarts > 0) return false;
		const start = this.#kept[this.#splits.at(-1) ?? 0];
		return lap[before] - lap[start] > 1;
	}

	/** Did the car go on at its speed across the restart? */
	#movesOn(before: number, row: number): boolean {
		const speed = this.#columns.get('speed');
		if (!speed) return this.#raw[row] < 2 * this.#step;
		const top = quantile(speed, 0.98);
		return speed[row] > 0.05 * top && Math.abs(speed[row] - speed[before]) < 0.1 * top + 0.2 * top * this.#step;
	}

	/** After a pause: does the lap count, the distance or the beacon's lap begin anew? */
	#beginsAnew(before: number, row: number): boolean {
		const lap = this.#columns.get('lap');
		if (lap && lap[row] < lap[before]) return true;
		const distance = this.#columns.get('distance');
		return !lap && distance !== undefined && distance[row] < 0.1 * distance[before];
	}

	/** Stamps coarser than the sampling, spread evenly between their changes; null where the clock is fine. */
	#coarseStamps(length: number): Float64Array | null {
		const raw = this.#raw;
		let repeated = 0;
		for (let i = 1; i < length; i++) if (raw[i] === raw[i - 1] && !this.#sameRow(i - 1, i)) repeated++;
		if (repeated < COARSE_SHARE * length) return null;
		const spread = new Float64Array(raw);
		let lastStep = NaN;
		for (let start = 0; start < length;) {
			let end = start + 1;
			while (end < length && raw[end] === raw[start]) end++;
			const ahead = end < length ? raw[end] - raw[start] : NaN;
			const step =
				ahead > 0 ? ahead / (end - start) : Number.isFinite(lastStep) ? lastStep : this.#step / (end - start);
			// The first stamp's rows may be cut: they end at the next stamp at the pace of the group that follows.
			for (let i = start; i < end; i++) spread[i] = raw[start] + (i - start) * step;
			if (ahead > 0) lastStep = step;
			start = end;
		}
		this.#warn(
			'time_rebuilt',
			0,
			() => 'several rows share each time stamp; they were spread evenly between the stamps'
		);
		return spread;
	}

	#warn(code: Warning['code'], row: number, message: (count: number) => string): void {
		const note = this.#notes.get(code);
		if (note) note.count++;
		else this.#notes.set(code, { count: 1, row: this.#lines[row], message });
	}
}
