import type { SourceSummary, Warning } from '../schemas/analysisDocument.ts';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { pick, rangeOf } from './columns.ts';
import type { Columns, Ranges } from './columns.ts';
import { WHEEL_CHANNELS } from './convertWheels.ts';
import { describeColumns } from './describeColumns.ts';
import { readClockColumn } from './fileClock.ts';
import type { FileClock } from './fileClock.ts';
import { missingColumn } from './missingColumn.ts';
import type { ColumnPlan } from './planColumns.ts';
import type { RawRun } from './rawRun.ts';
import { refuseStill } from './refuseStill.ts';
import { resolveUnits } from './resolveUnits.ts';
import type { RowNotes } from './rowNotes.ts';
import { MOTION_CHANNELS, speedFromWheels } from './speedFromWheels.ts';
import { MIN_SAMPLES, splitRuns } from './splitRuns.ts';
import { buildTimeline } from './timeline.ts';
import type { Timeline } from './timeline.ts';
import { turnColumns } from './turnColumns.ts';

export interface ReadTable {
	columns: Columns;
	/** of the columns as read */
	ranges: Ranges;
	/** 1-based line of the file for each row */
	lines: Int32Array;
	/** all columns of the file, in its order */
	plans: readonly ColumnPlan[];
	/** what is known of the file already */
	source: Pick<SourceSummary, 'encoding' | 'delimiter' | 'decimal' | 'headerRow' | 'metadata'>;
	/** what was odd in the rows, and the names of the columns by slot */
	notes: RowNotes;
	noteHeaders: readonly string[];
	warnings: Warning[];
}

/**
 * Turns the columns as read into runs: one clock that runs forward, house units, one run per outing.
 *
 * @returns at least one run
 * @throws {KerbnoteError} `missing_time`, `missing_speed`, `no_data_rows`, `time_not_increasing`, `too_few_samples`, `no_movement`
 */
export function buildRuns(table: ReadTable): RawRun[] {
	const { columns, plans } = table;
	const byChannel = new Map<string, ColumnPlan>();
	for (const plan of plans) if (plan.channel) byChannel.set(plan.channel, plan);
	const timePlan = byChannel.get('time') ?? byChannel.get('lapTime');
	const timeColumn = timePlan?.channel ? columns.get(timePlan.channel) : undefined;
	if (!timePlan || !timeColumn) throw missingColumn('missing_time', 'time', plans, table.source.headerRow);
	const moves = [...MOTION_CHANNELS, ...WHEEL_CHANNELS].some((channel) => columns.has(channel));
	if (!moves) throw missingColumn('missing_speed', 'speed, distance or position', plans, table.source.headerRow);
	if (timeColumn.length === 0) {
		throw new KerbnoteError(
			'no_data_rows',
			'the table has a header but no rows of numbers below it',
			'Export the run again and check that the recording holds laps',
			{ row: table.source.headerRow }
		);
	}
	const clock = readClockColumn(timeColumn, timePlan);
	if (!clock.seconds.some(Number.isFinite)) {
		throw new KerbnoteError(
			'missing_time',
			`no cell of the time column "${timePlan.header}" can be read as a time`,
			'Export time as seconds, h:mm:ss.sss or ISO 8601',
			{
				row: table.lines[0],
				column: timePlan.header
			}
		);
	}
	refuseStandingTime(clock.seconds, table.lines, timePlan.header);
	const isLapTime = timePlan.channel === 'lapTime';
	columns.delete('time');
	if (isLapTime) columns.delete('lapTime');
	const timeline = buildTimeline(clock.seconds, table.lines, columns, { isLapTime });
	if (timeline.lapTimeS && !columns.has('lapTime')) columns.set('lapTime', timeline.lapTimeS);
	const lines = keepRows(columns, table.lines, timeline);
	if (timeline.seconds.length < MIN_SAMPLES) {
		throw new KerbnoteError(
			'too_few_samples',
			`the table holds ${timeline.seconds.length} samples, at least ${MIN_SAMPLES} are needed`,
			'Export a run with at least one lap',
			{ row: table.source.headerRow }
		);
	}
	const otherTimes = convertLapTimes(columns, byChannel);
	// Rows that were left out (a footer's maxima) may have set a range.
	const ranges = timeline.kept ? rangesOf(columns) : table.ranges;
	relabelRestartingDistance(columns, ranges, byChannel);
	turnColumns(columns, ranges, byChannel);
	const resolved = resolveUnits(columns, ranges, timeline.seconds, byChannel);
	const speedWarnings = speedFromWheels(columns, byChannel, resolved, table.source.headerRow);
	refuseStill(columns, { row: lines[0], column: byChannel.get('speed')?.header ?? null });
	for (const [channel, label] of otherTimes) resolved.units.set(channel, label);
	resolved.units.set(timePlan.channel ?? 'time', clock.label);
	const warnings = [
		...table.warnings,
		...table.notes.toWarnings(
			table.noteHeaders,
			timeline.footerRows > 0 ? table.lines[table.lines.length - timeline.footerRows] : Infinity,
			timePlan.header
		),
		...timeWarnings(timeline, lines, table.lines, clock),
		...duplicateWarnings(plans),
		...resolved.warnings,
		...speedWarnings
	];
	return splitRuns({
		columns,
		seconds: timeline.seconds,
		splits: timeline.splits,
		lines,
		epochMs: clock.epochMs,
		source: table.source,
		described: describeColumns(plans, byChannel, ranges, resolved.units, clock.seconds),
		resolved,
		warnings
	});
}

/** Time that never goes forward is no time. */
function refuseStandingTime(seconds: Float64Array, lines: Int32Array, column: string): void {
	if (seconds.length < MIN_SAMPLES) return;
	for (let i = 1; i < seconds.length; i++) if (seconds[i] > seconds[i - 1]) return;
	throw new KerbnoteError(
		'time_not_increasing',
		`time in column "${column}" never goes forward`,
		'Export the run again with the time of each sample, earliest first',
		{ row: lines[0], column }
	);
}

function keepRows(columns: Columns, lines: Int32Array, { kept, seconds }: Timeline): Int32Array {
	if (!kept) return lines.length === seconds.length ? lines : lines.slice(0, seconds.length);
	for (const [channel, column] of columns) columns.set(channel, pick(column, kept));
	return Int32Array.from(kept, (row) => lines[row]);
}

function convertLapTimes(columns: Columns, plans: ReadonlyMap<string, ColumnPlan>): Map<string, string> {
	const labels = new Map<string, string>();
	for (const channel of ['lapTime', 'lastLapTime'] as const) {
		const [column, plan] = [columns.get(channel), plans.get(channel)];
		if (!column || !plan) continue;
		const clock = readClockColumn(column, plan);
		columns.set(channel, clock.seconds);
		labels.set(channel, clock.label);
	}
	return labels;
}

function rangesOf(columns: Columns): Ranges {
	return new Map([...columns].map(([channel, column]) => [channel, rangeOf(column)]));
}

/** A distance that falls back to nothing again and again is counted from the line: a lap distance. */
function relabelRestartingDistance(columns: Columns, ranges: Ranges, plans: Map<string, ColumnPlan>): void {
	const distance = columns.get('distance');
	if (!distance || columns.has('lapDistance')) return;
	const range = ranges.get('distance') ?? rangeOf(distance);
	const span = range.max - range.min;
	let restarts = 0;
	for (let i = 1; i < distance.length; i++) if (distance[i] < distance[i - 1] - 0.4 * span) restarts++;
	if (restarts === 0) return;
	columns.set('lapDistance', distance);
	ranges.set('lapDistance', range);
	columns.delete('distance');
	const plan = plans.get('distance');
	if (plan) plans.set('lapDistance', plan);
}

function timeWarnings(timeline: Timeline, lines: Int32Array, allLines: Int32Array, clock: FileClock): Warning[] {
	const warnings = [...timeline.warnings];
	if (clock.warning) warnings.push(clock.warning);
	if (timeline.footerRows > 0) {
		const first = allLines[allLines.length - timeline.footerRows];
		warnings.push({
			code: 'footer_ignored',
			message: `${timeline.footerRows} rows without a time at the end of the file left out`,
			row: first
		});
	}
	return warnings;
}

function duplicateWarnings(plans: readonly ColumnPlan[]): Warning[] {
	return plans.flatMap(({ header, duplicateOf }): Warning[] =>
		duplicateOf === null
			? []
			: [
					{
						code: 'duplicate_column',
						message: `column "${header}" measures the same as "${duplicateOf}", which is used`,
						row: null
					}
				]
	);
}
