import type { LapGrid } from '../../analysis/model.ts';

type GridChannel = {
	[Key in keyof LapGrid]: LapGrid[Key] extends Float64Array | null ? Key : never;
}[keyof LapGrid];

/**
 * What of a lap's grid is stored, and how finely: whole numbers to one unit, at or under what the sensors can tell. Time is in
 * whole microseconds, so that a ledger of stored laps still sums to Δ.
 */
export const TRACE_CHANNELS = {
	timeS: { perUnit: 1_000_000, unit: 's' },
	speedKmh: { perUnit: 100, unit: 'km/h' },
	brakePct: { perUnit: 10, unit: '%' },
	throttlePct: { perUnit: 10, unit: '%' },
	steeringDeg: { perUnit: 10, unit: '°' },
	offsetM: { perUnit: 100, unit: 'm' },
	curvaturePerM: { perUnit: 100_000, unit: '1/m' },
	accLongMps2: { perUnit: 100, unit: 'm/s²' },
	gear: { perUnit: 1, unit: '' },
	engineSpeedRpm: { perUnit: 1, unit: '1/min' }
} as const satisfies Record<GridChannel, { perUnit: number; unit: string }>;

export type TraceChannel = keyof typeof TRACE_CHANNELS;

export const TRACE_CHANNEL_NAMES = Object.keys(TRACE_CHANNELS) as TraceChannel[];
