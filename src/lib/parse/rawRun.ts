import type { SourceSummary } from '../schemas/analysisDocument.ts';
import type { BrakeUnit, Channel } from '../schemas/channels.ts';

/**
 * A recording as read from a file: columns in the house's units, one entry per sample, nothing judged yet.
 *
 * Invariants: every column has `timeS.length` entries; `timeS` starts at 0 and strictly increases; missing is NaN.
 * Units: distance m · speed km/h · brake by `brakeUnit` · throttle % · steering ° · engine speed 1/min · latitude, longitude ° ·
 * x, y, altitude m · heading ° · accelerations m/s² · yaw rate rad/s · wheel speeds by `wheelUnit` · fuel as written.
 */
export interface RawRun {
	source: SourceSummary;
	/** s from the run's first sample; Float64 always */
	timeS: Float64Array;
	/** 1-based line of the file for each sample */
	fileRow: Int32Array;
	/** every recognised channel but time; Float64 for distance, positions, lap; Float32 is enough for the rest */
	columns: Partial<Record<Exclude<Channel, 'time'>, Float64Array | Float32Array>>;
	brakeUnit: BrakeUnit | null;
	wheelUnit: 'kmh' | 'radps' | null;
	/** time of the first sample on the clock of the file, ms since 1970 UTC, where the file says so */
	startedAtMs: number | null;
}
