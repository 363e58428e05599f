import { unitById } from './columnUnits.ts';
import { quantile } from './columns.ts';
import type { UnitWork } from './unitWork.ts';

/** Lateral and longitudinal accelerations of road and racing cars stay below this many g, and exceed as many m/s². */
const G_RANGE = 6;

/** Steering in degrees, accelerations in m/s², yaw rate in rad/s; undeclared, by their range. */
export function convertInertial(work: UnitWork): void {
	convertSteering(work);
	convertAccelerations(work);
	convertYawRate(work);
}

function convertSteering(work: UnitWork): void {
	const column = work.columns.get('steering');
	if (!column) return;
	const unit = work.declared('steering');
	if (unit?.dimension === 'angle') return work.use('steering', unit);
	const largest = Math.max(Math.abs(quantile(column, 0.002)), Math.abs(quantile(column, 0.998)));
	if (unit === null && largest > 1.05 && largest <= 9.5)
		return work.use('steering', unitById('rad'), 'taken as rad by its range');
	if (unit === null && largest > 9.5 && largest <= 1100)
		return work.use('steering', unitById('deg'), 'taken as degrees by its range');
	work.units.set('steering', unit?.id ?? 'raw counts');
}

function convertAccelerations(work: UnitWork): void {
	for (const channel of ['accLong', 'accLat'] as const) {
		const column = work.columns.get(channel);
		if (!column) continue;
		const unit = work.declared(channel);
		if (unit) {
			work.use(channel, unit);
			continue;
		}
		const middle = quantile(column, 0.5);
		const size = Math.max(quantile(column, 0.98) - middle, middle - quantile(column, 0.02));
		const guess = unitById(size < G_RANGE ? 'g' : 'm/s²');
		work.use(channel, guess, `taken as ${guess.id} by its range`);
	}
}

function convertYawRate(work: UnitWork): void {
	const column = work.columns.get('yawRate');
	if (!column) return;
	const unit = work.declared('yawRate');
	if (unit) return work.use('yawRate', unit);
	const size = Math.max(quantile(column, 0.98), -quantile(column, 0.02));
	const guess = unitById(size > 4 ? 'deg/s' : 'rad/s');
	work.use('yawRate', guess, `taken as ${guess.id} by its range`);
}
