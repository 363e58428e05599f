import type { SourceColumn, SourceSummary, Warning } from '../schemas/analysisDocument.ts';
import { channelSchema } from '../schemas/channels.ts';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { typicalStep } from './columns.ts';
import type { Column, Columns } from './columns.ts';
import type { RawRun } from './rawRun.ts';
import type { ResolvedUnits } from './resolveUnits.ts';

/** Fewer samples than this are no run. */
export const MIN_SAMPLES = 10;

export interface RunParts {
	columns: Columns;
	/** s, increasing within a run */
	seconds: Float64Array;
	/** where runs begin, the first (0) left out */
	splits: readonly number[];
	lines: Int32Array;
	/** ms since 1970 UTC at seconds = 0 */
	epochMs: number | null;
	source: Pick<SourceSummary, 'encoding' | 'delimiter' | 'decimal' | 'headerRow' | 'metadata'>;
	described: SourceColumn[];
	resolved: ResolvedUnits;
	warnings: readonly Warning[];
}

/**
 * Cuts the columns of a file into its runs, each on a clock of its own.
 *
 * @returns at least one
 * @throws {KerbnoteError} `time_not_increasing` where no stretch is long enough to be one
 */
export function splitRuns(parts: RunParts): RawRun[] {
	const { lines, resolved } = parts;
	const warnings = [...parts.warnings];
	const starts = [0, ...parts.splits];
	const spans = starts
		.map((from, i) => ({ from, to: starts[i + 1] ?? parts.seconds.length }))
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
		const seconds = parts.seconds.slice(from, to);
		const startedAtMs = parts.epochMs === null ? null : parts.epochMs + Math.round(seconds[0] * 1000);
		const zero = seconds[0];
		for (let i = 0; i < seconds.length; i++) seconds[i] -= zero;
		const columns: RawRun['columns'] = {};
		for (const [channel, column] of parts.columns) {
			const published = channelSchema.exclude(['time']).safeParse(channel);
			if (published.success) columns[published.data] = cut(column, from, to);
		}
		const source: SourceSummary = {
			...parts.source,
			rows: to - from,
			sampleRateHz: sampleRate(seconds),
			columns: parts.described,
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
