import type { Channel } from '../../schemas/channels.ts';
import type { ErrorCode, WarningCode } from '../../schemas/codes.ts';
import { encodeText, writeFile, writeText } from './dialect.ts';
import type { Dialect, WrittenColumn } from './dialect.ts';
import { testRecording } from './recording.ts';
import type { Sample } from './recording.ts';

/** A file, and what must come out of it. */
export interface AcceptedCase {
	name: string;
	bytes: Uint8Array;
	/** units as understood, by channel */
	units?: Partial<Record<Channel, string>>;
	warnings?: readonly WarningCode[];
	/** channels that must be there beside time */
	channels?: readonly Channel[];
	/** complete laps that must be found; 3 unless given; null: not looked at */
	laps?: number | null;
	runs?: number;
	/** the time of every sample must be the recording's */
	sameTime?: boolean;
	/** km/h that the speed may differ by */
	speedWithin?: number;
}

export interface RefusedCase {
	name: string;
	bytes: Uint8Array;
	code: ErrorCode;
	row?: number;
}

export const samples = testRecording();

export const TIME: WrittenColumn = { header: 'time (s)', unit: 's', cell: ({ timeS }) => timeS };
export const LAP: WrittenColumn = { header: 'lap', cell: ({ lap }) => lap };
export const DISTANCE: WrittenColumn = { header: 'distance (m)', unit: 'm', cell: ({ distanceM }) => distanceM };
export const SPEED: WrittenColumn = { header: 'speed (km/h)', unit: 'km/h', cell: ({ speedKmh }) => speedKmh };
export const THROTTLE: WrittenColumn = { header: 'throttle (%)', unit: '%', cell: ({ throttlePct }) => throttlePct };
export const BRAKE: WrittenColumn = { header: 'brake (%)', unit: '%', cell: ({ brakePct }) => brakePct };
export const STEERING: WrittenColumn = {
	header: 'steering (deg)',
	unit: 'deg',
	cell: ({ steeringDeg }) => steeringDeg
};
export const ALL = [TIME, LAP, DISTANCE, SPEED, THROTTLE, BRAKE, STEERING];

export const column = (header: string, cell: WrittenColumn['cell'], unit?: string): WrittenColumn => ({
	header,
	cell,
	unit
});
export const round = (value: number, places: number) => Number(value.toFixed(places));
export const without = (...gone: WrittenColumn[]) => ALL.filter((one) => !gone.includes(one));
export const swap = (old: WrittenColumn, fresh: WrittenColumn) => ALL.map((one) => (one === old ? fresh : one));
export const bare = ALL.map((one) => ({ ...one, header: one.header.replace(/ \(.*/, '') }));
export const file = (columns: readonly WrittenColumn[], dialect?: Dialect, rows: readonly Sample[] = samples) =>
	writeFile(columns, rows, dialect);
export const lines = () => writeText(ALL, samples).trimEnd().split('\n');
export const fromLines = (text: readonly string[]) => encodeText(`${text.join('\n')}\n`);
export const accepted = (name: string, bytes: Uint8Array, more: Partial<AcceptedCase> = {}): AcceptedCase => ({
	name,
	bytes,
	sameTime: true,
	speedWithin: 0.01,
	channels: ['speed'],
	...more
});
