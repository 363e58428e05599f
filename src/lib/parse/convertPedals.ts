import type { BrakeUnit } from '../schemas/channels.ts';
import { unitById } from './columnUnits.ts';
import { rangeOf } from './columns.ts';
import type { Column } from './columns.ts';
import type { UnitWork } from './unitWork.ts';

/**
 * Brakes and throttle. A share becomes a percentage; a pressure becomes bar, a force N; counts and switches stay what they are. What is
 * not declared is told by the range: 0–1, 0–100, two values only, or larger.
 *
 * @returns what the brake measures; null where there is none
 */
export function convertPedals(work: UnitWork): BrakeUnit | null {
	convertThrottle(work);
	const rear = convertBrake(work, 'brakeRear');
	return convertBrake(work, 'brake') ?? rear;
}

function convertBrake(work: UnitWork, channel: 'brake' | 'brakeRear'): BrakeUnit | null {
	const column = work.columns.get(channel);
	if (!column) return null;
	const plan = work.plans.get(channel);
	const unit = plan?.unit ?? null;
	const { min: low, max: high } = work.range(channel);
	if (unit?.id === 'switch' || (unit === null && isSwitch(column))) {
		for (let i = 0; i < column.length; i++)
			column[i] = Number.isNaN(column[i]) ? NaN : column[i] > (low + high) / 2 ? 1 : 0;
		work.units.set(channel, 'switch');
		work.ranges.set(channel, rangeOf(column));
		return 'switch';
	}
	if (unit?.dimension === 'ratio') {
		// A percentage whose largest value is 1 is a share that was called one.
		const share = unit.id === '%' && high > 0.2 && high <= 1.001 && high - low > 0.2;
		work.use(channel, share ? unitById('0..1') : unit);
		return 'pct';
	}
	if (unit?.dimension === 'pressure') {
		work.use(channel, unit);
		return 'bar';
	}
	if (unit?.dimension === 'force') {
		work.use(channel, unit);
		return 'n';
	}
	if (unit !== null && unit.dimension !== 'count') {
		work.units.set(channel, unit.id);
		return 'raw';
	}
	if (unit === null && low > -0.1 && high <= 1.05) {
		work.use(channel, unitById('0..1'));
		return 'pct';
	}
	const pressure = /press|druck|圧|druk|pressao/i.test(
		plan?.header.normalize('NFD').replace(/[\u0300-\u036f]/g, '') ?? ''
	);
	if (unit === null && low > -10 && high <= 105 && !pressure) {
		work.use(channel, unitById('%'), 'taken as % by its range');
		return 'pct';
	}
	if (unit === null && pressure && high <= 250) {
		work.use(channel, unitById('bar'), 'taken as bar by its range');
		return 'bar';
	}
	work.units.set(channel, 'raw counts');
	return 'raw';
}

function convertThrottle(work: UnitWork): void {
	const column = work.columns.get('throttle');
	if (!column) return;
	const unit = work.declared('throttle');
	const { min: low, max: high } = work.range('throttle');
	const share = low > -0.1 && high <= 1.05 && high - low > 0.2;
	if (unit?.dimension === 'ratio') return work.use('throttle', unit.id === '%' && share ? unitById('0..1') : unit);
	if (unit === null && share) return work.use('throttle', unitById('0..1'));
	if (unit === null && low > -10 && high <= 110) return work.use('throttle', unitById('%'), 'taken as % by its range');
	// Counts, volts or degrees of the plate: scaled to the run's own rest and full later.
	const span = high - low;
	for (let i = 0; i < column.length; i++) column[i] = span > 0 ? ((column[i] - low) / span) * 100 : 0;
	work.ranges.set('throttle', rangeOf(column));
	work.units.set('throttle', unit?.id ?? 'raw counts');
}

/** Only two values, one of them 0, and the other 1, 100 or 255. */
function isSwitch(column: Column): boolean {
	let on = NaN;
	let seen = false;
	for (let i = 0; i < column.length; i++) {
		const value = column[i];
		if (value === 0 || Number.isNaN(value)) continue;
		if (seen && value !== on) return false;
		on = value;
		seen = true;
	}
	return seen && (on === 1 || on === 100 || on === 255);
}
