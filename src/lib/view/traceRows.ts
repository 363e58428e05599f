import { UNITS_PER_PX, WIDTH_UNITS } from './geometry/units.ts';
import { scaleLinear } from 'd3-scale';
import type { LapGrid } from '../analysis/model.ts';
import { formatNumber } from '../format/number.ts';
import { SPEED_UNIT_TEXT, speedIn, type SpeedUnit } from '../format/speed.ts';
import { gridValue, metresBetween, type GridColumn } from './gridValue.ts';
import { tracePath } from './geometry/tracePath.ts';

export type RowKey = 'brake' | 'speed' | 'throttle' | 'steering';

/** One row of the trace stack: a channel of both laps over the card's window. */
export interface TraceRow {
	key: RowKey;
	name: string;
	unit: string;
	/** unit as it stands behind a value */
	valueUnit: string;
	heightPx: number;
	domain: [number, number];
	/** at most three; the first is drawn as the row's floor */
	ticks: { value: number; text: string }[];
	/** path data in tenths of a pixel, WIDTH_UNITS wide; empty where the lap has nothing here */
	driver: string;
	reference: string;
	/** said in the row where a file lacks the channel; both lines may be empty then */
	missing: string | null;
}

export interface TraceInput {
	driver: LapGrid;
	reference: LapGrid;
	fromM: number;
	toM: number;
	speedUnit: SpeedUnit;
	/** of the rows, px; a card's unless told otherwise */
	heightsPx?: Record<RowKey, number>;
	/** units to a pixel column, where points exceed pixels: see tracePath */
	columnUnits?: number;
}

const CHANNELS: Record<RowKey, { name: string; column: GridColumn; heightPx: number; said: string }> = {
	brake: { name: 'Brake', column: 'brakePct', heightPx: 106, said: 'brake' },
	speed: { name: 'Speed', column: 'speedKmh', heightPx: 106, said: 'speed' },
	throttle: { name: 'Throttle', column: 'throttlePct', heightPx: 56, said: 'throttle' },
	steering: { name: 'Steering', column: 'steeringDeg', heightPx: 56, said: 'steering' }
};

/**
 * The rows of a card: brake, speed and throttle always (a missing channel is said, not hidden), steering where a file has it.
 */
export function traceRows(input: TraceInput): TraceRow[] {
	const keys: RowKey[] = ['brake', 'speed', 'throttle'];
	if (input.driver.steeringDeg || input.reference.steeringDeg) keys.push('steering');
	return keys.map((key) => traceRow(key, input));
}

function traceRow(key: RowKey, input: TraceInput): TraceRow {
	const { name, column, said } = CHANNELS[key];
	const heightPx = input.heightsPx?.[key] ?? CHANNELS[key].heightPx;
	const placesM = metresBetween(input.fromM, input.toM);
	const read = (grid: LapGrid): number[] => {
		const values = placesM.map((placeM) => gridValue(grid, column, placeM));
		return key === 'speed' ? values.map((value) => speedIn(value, input.speedUnit)) : values;
	};
	const driver = read(input.driver);
	const reference = read(input.reference);
	const { domain, ticks } = rowScale(key, [...driver, ...reference].filter(Number.isFinite));
	const x = scaleLinear([input.fromM, input.toM], [0, WIDTH_UNITS]);
	const y = scaleLinear(domain, [heightPx * UNITS_PER_PX, 0]);
	const path = (values: number[]): string => tracePath({ placesM, values, x, y, columnUnits: input.columnUnits });
	return {
		key,
		name,
		unit: {
			brake: '% of full pedal',
			speed: SPEED_UNIT_TEXT[input.speedUnit],
			throttle: '%',
			steering: '°, left up'
		}[key],
		valueUnit: { brake: '%', speed: SPEED_UNIT_TEXT[input.speedUnit], throttle: '%', steering: '°' }[key],
		heightPx,
		domain,
		ticks,
		driver: path(driver),
		reference: path(reference),
		missing: missingText(said, input.driver[column] === null, input.reference[column] === null)
	};
}

/** What to say where a channel is absent: from one file, from the other, or from both. */
export function missingText(channel: string, driverLacks: boolean, referenceLacks: boolean): string | null {
	if (driverLacks && referenceLacks) return `No ${channel} channel in either file`;
	if (driverLacks) return `No ${channel} channel in this file`;
	if (referenceLacks) return `No ${channel} channel in the reference’s file`;
	return null;
}

/** Pedals are always 0–100; speed is rounded out to 5 and never starts from 0; steering is rounded out to 30° and holds 0. */
export function rowScale(key: RowKey, values: number[]): Pick<TraceRow, 'domain' | 'ticks'> {
	const say = (ticks: number[]): TraceRow['ticks'] => ticks.map((value) => ({ value, text: formatNumber(value) }));
	if (key === 'brake') return { domain: [0, 100], ticks: say([0, 50, 100]) };
	if (key === 'throttle') return { domain: [0, 100], ticks: say([0, 100]) };
	let low = Infinity;
	let high = -Infinity;
	for (const value of values) {
		low = Math.min(low, value);
		high = Math.max(high, value);
	}
	if (key === 'steering') {
		const to = (value: number, round: (v: number) => number): number => round(value / 30) * 30 + 0;
		const domain: [number, number] = [to(Math.min(0, low), Math.floor), to(Math.max(0, high), Math.ceil)];
		if (domain[0] === domain[1] || !Number.isFinite(domain[0])) return { domain: [-30, 30], ticks: say([0]) };
		// Ends too near to 0 for two numbers are not written.
		const clear = domain.filter((end) => Math.abs(end) > 0.3 * (domain[1] - domain[0]));
		return { domain, ticks: say([0, ...clear]) };
	}
	if (low > high) return { domain: [0, 100], ticks: say([0, 50, 100]) };
	const domain: [number, number] = [
		Math.floor(low / 5) * 5,
		Math.max(Math.ceil(high / 5) * 5, Math.floor(low / 5) * 5 + 5)
	];
	return { domain, ticks: say(fewTicks(domain)) };
}

/** At most three round values within a domain: each 40, or a rounder or finer step where 40 gives too many or too few. */
export function fewTicks([low, high]: [number, number]): number[] {
	const at = (step: number): number[] => {
		const ticks: number[] = [];
		for (let value = Math.ceil(low / step) * step; value <= high; value += step) ticks.push(value);
		return ticks;
	};
	for (const step of [40, 20, 10, 5]) {
		const ticks = at(step);
		if (ticks.length >= 2)
			return ticks.length <= 3 ? ticks : at(step * 2).length >= 2 ? at(step * 2).slice(0, 3) : ticks.slice(0, 3);
	}
	return at(5).slice(0, 3);
}
