import type { SourceColumn, SourceSummary, Warning } from '../schemas/analysisDocument.ts';
import { channelSchema } from '../schemas/channels.ts';
import type { Channel } from '../schemas/channels.ts';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { pick, range, typicalStep } from './columns.ts';
import type { Column, Columns } from './columns.ts';
import { readClockColumn } from './fileClock.ts';
import type { FileClock } from './fileClock.ts';
import type { ColumnPlan } from './planColumns.ts';
import type { RawRun } from './rawRun.ts';
import type { RowNotes } from './rowNotes.ts';
import { resolveUnits } from './resolveUnits.ts';
import type { ResolvedUnits } from './resolveUnits.ts';
import { buildTimeline } from './timeline.ts';
import type { Timeline } from './timeline.ts';

export interface ReadTable {
	columns: Columns;
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

const MIN_SAMPLES = 10;
const MOTION: readonly Channel[] = ['speed', 'distance', 'lapDistance', 'latitude', 'positionX'];
const WHEELS: readonly Channel[] = ['wheelSpeedFl', 'wheelSpeedFr', 'wheelSpeedRl', 'wheelSpeedRr'];

/**
 * Turns the columns as read into runs: one clock that runs forward, house units, one run per outing.
 *
 * @returns at least one run
 * @throws {KerbnoteError} `missing_time`, `missing_speed`, `no_data_rows`, `unreadable_time`, `unreadable_position`, `too_few_samples`
 */
export function buildRuns(table: ReadTable): RawRun[] {
	const { columns, plans } = table;
	const byChannel = new Map<string, ColumnPlan>();
	for (const plan of plans) if (plan.channel) byChannel.set(plan.channel, plan);
	const timePlan = byChannel.get('time') ?? byChannel.get('lapTime');
	const timeColumn = timePlan?.channel ? columns.get(timePlan.channel) : undefined;
	if (!timePlan || !timeColumn) throw missing('missing_time', 'time', plans);
	if (!MOTION.some((channel) => columns.has(channel)))
		throw missing('missing_speed', 'speed, distance or position', plans);
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
			'unreadable_time',
			`no cell of the time column "${timePlan.header}" can be read as a time`,
			'Export time as seconds, h:mm:ss.sss or ISO 8601',
			{
				row: table.lines[0],
				column: timePlan.header
			}
		);
	}
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
	const relabelled = relabelRestartingDistance(columns, byChannel);
	const resolved = resolveUnits(columns, timeline.seconds, byChannel);
	const speedWarnings = speedFromWheels(columns, byChannel, resolved);
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
	const described = describeColumns(table, byChannel, columns, resolved, relabelled, clock.seconds, timePlan);
	return splitRuns(table, { timeline, lines, clock, warnings, described, resolved });
}

function missing(code: 'missing_time' | 'missing_speed', what: string, plans: readonly ColumnPlan[]): KerbnoteError {
	const headers = plans
		.slice(0, 12)
		.map(({ header }) => header.slice(0, 40))
		.join(', ');
	return new KerbnoteError(
		code,
		`no column for ${what} was recognised among: ${headers}`,
		`Export the run with ${what}, or say on the upload page which column it is`
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

/** A distance that falls back to nothing again and again is counted from the line: a lap distance. */
function relabelRestartingDistance(columns: Columns, plans: Map<string, ColumnPlan>): boolean {
	const distance = columns.get('distance');
	if (!distance || columns.has('lapDistance')) return false;
	const { min, max } = range(distance);
	const span = max - min;
	let restarts = 0;
	for (let i = 1; i < distance.length; i++) if (distance[i] < distance[i - 1] - 0.4 * span) restarts++;
	if (restarts === 0) return false;
	columns.set('lapDistance', distance);
	columns.delete('distance');
	const plan = plans.get('distance');
	if (plan) plans.set('lapDistance', plan);
	return true;
}

/** Without any speed the wheels' own stands in: the middle of them, which a single locked or spinning one does not move. */
function speedFromWheels(columns: Columns, plans: ReadonlyMap<string, ColumnPlan>, resolved: ResolvedUnits): Warning[] {
	const named = plans.get('speed')?.header;
	if (named && /wheel|rad|roue|rueda|ruota|roda|wiel|車輪/i.test(named)) {
		return [
			{
				code: 'speed_from_wheel',
				message: `speed is a wheel's ("${named}"): it is wrong where the wheel slips`,
				row: null
			}
		];
	}
	const wheels = WHEELS.flatMap((channel) => columns.get(channel) ?? []);
	if (MOTION.some((channel) => columns.has(channel)) || wheels.length === 0) return [];
	if (resolved.wheelUnit !== 'kmh') throw missing('missing_speed', 'speed, distance or position', [...plans.values()]);
	const speed = new Float32Array(wheels[0].length);
	const values = new Float64Array(wheels.length);
	for (let i = 0; i < speed.length; i++) {
		for (let wheel = 0; wheel < wheels.length; wheel++) values[wheel] = wheels[wheel][i];
		values.sort();
		speed[i] = (values[(values.length - 1) >> 1] + values[values.length >> 1]) / 2;
	}
	columns.set('speed', speed);
	return [
		{
			code: 'speed_from_wheel',
			message: 'the file has no speed; the middle of the wheel speeds stands in, which is wrong where they slip',
			row: null
		}
	];
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

function describeColumns(
	table: ReadTable,
	byChannel: ReadonlyMap<string, ColumnPlan>,
	columns: Columns,
	resolved: ResolvedUnits,
	relabelled: boolean,
	seconds: Float64Array,
	timePlan: ColumnPlan
): SourceColumn[] {
	return table.plans.map((plan): SourceColumn => {
		const used = plan.channel !== null && byChannel.get(plan.channel) === plan;
		const channel = used && relabelled && plan.channel === 'distance' ? 'lapDistance' : plan.channel;
		const published = channelSchema.safeParse(used ? channel : null);
		const column = plan === timePlan ? seconds : used && channel ? columns.get(channel) : undefined;
		const { min, max } = column ? range(column) : { min: NaN, max: NaN };
		return {
			header: plan.header,
			channel: published.success ? published.data : null,
			unit: (channel && resolved.units.get(channel)) ?? plan.unit?.id ?? '',
			confidence: Math.round(plan.confidence * 100) / 100,
			min: Number.isFinite(min) ? min : null,
			max: Number.isFinite(max) ? max : null,
			samples: plan.samples
		};
	});
}

interface Parts {
	timeline: Timeline;
	lines: Int32Array;
	clock: FileClock;
	warnings: Warning[];
	described: SourceColumn[];
	resolved: ResolvedUnits;
}

function splitRuns(table: ReadTable, { timeline, lines, clock, warnings, described, resolved }: Parts): RawRun[] {
	const starts = [0, ...timeline.splits];
	const spans = starts
		.map((from, i) => ({ from, to: starts[i + 1] ?? timeline.seconds.length }))
		.filter(({ from, to }) => to - from >= MIN_SAMPLES);
	if (spans.length === 0) {
		throw new KerbnoteError(
			'time_not_increasing',
			'time jumps back again and again, so that no stretch of the file is a run',
			'Export the run again, sorted by time',
			{ row: lines[starts[1] ?? 0] }
		);
	}
	if (spans.length > 1) {
		warnings.push({
			code: 'more_runs',
			message: `the file holds ${spans.length} runs; the second begins in row ${lines[spans[1].from]}`,
			row: lines[spans[1].from]
		});
	}
	return spans.map(({ from, to }): RawRun => {
		const seconds = timeline.seconds.slice(from, to);
		const startedAtMs = clock.epochMs === null ? null : clock.epochMs + Math.round(seconds[0] * 1000);
		const zero = seconds[0];
		for (let i = 0; i < seconds.length; i++) seconds[i] -= zero;
		const columns: RawRun['columns'] = {};
		for (const [channel, column] of table.columns) {
			const published = channelSchema.exclude(['time']).safeParse(channel);
			if (published.success) columns[published.data] = cut(column, from, to);
		}
		const source: SourceSummary = {
			...table.source,
			rows: to - from,
			sampleRateHz: sampleRate(seconds),
			columns: described,
			warnings: [...warnings]
		};
		return {
			source,
			timeS: seconds,
			fileRow: lines.slice(from, to),
			columns,
			brakeUnit: resolved.brakeUnit,
			wheelUnit: resolved.wheelUnit,
			startedAtMs
		};
	});
}

function cut(column: Column, from: number, to: number): Column {
	return from === 0 && to === column.length ? column : column.slice(from, to);
}

/** Samples per second, from the steps near the usual one: pauses do not count. */
function sampleRate(seconds: Float64Array): number {
	const usual = typicalStep(seconds);
	let [sum, count] = [0, 0];
	for (let i = 1; i < seconds.length; i++) {
		const step = seconds[i] - seconds[i - 1];
		if (step > 1.5 * usual) continue;
		sum += step;
		count++;
	}
	return sum > 0 ? Math.round((count / sum) * 1000) / 1000 : 0;
}
