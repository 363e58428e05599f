import { unitById } from './columnUnits.ts';
import { rangeOf } from './columns.ts';
import type { UnitWork } from './unitWork.ts';

/** Latitude and longitude in degrees: run-together minutes, whole numbers and hemisphere columns taken in; lengths in metres. */
export function convertPositions(work: UnitWork): void {
	for (const channel of ['latitude', 'longitude'] as const) {
		const column = work.columns.get(channel);
		if (!column) continue;
		const unit = work.declared(channel);
		const { min, max } = work.range(channel);
		const largest = Math.max(Math.abs(min), Math.abs(max));
		let label = 'deg';
		if (unit?.id === 'rad') work.use(channel, unit);
		else if (largest > 1e6) {
			// Degrees times ten million, as receivers send them in whole numbers.
			work.scale(channel, column, 1e-7);
			label = '1e-7 deg';
		} else if (largest > (channel === 'latitude' ? 90 : 180)) {
			for (let i = 0; i < column.length; i++) {
				const size = Math.abs(column[i]);
				const whole = Math.floor(size / 100);
				column[i] = Math.sign(column[i]) * (whole + (size - whole * 100) / 60);
			}
			label = 'ddmm.mmmm';
		}
		if (!work.units.has(channel)) work.units.set(channel, work.plans.get(channel)?.angle ? 'deg min' : label);
		const side = work.columns.get(channel === 'latitude' ? 'latitudeHemisphere' : 'longitudeHemisphere');
		if (side) for (let i = 0; i < column.length; i++) column[i] = Math.abs(column[i]) * side[i];
		if (side || label === 'ddmm.mmmm') work.ranges.set(channel, rangeOf(column));
	}
	for (const channel of ['distance', 'lapDistance', 'positionX', 'positionY', 'altitude'] as const) {
		if (work.columns.has(channel)) work.use(channel, work.declared(channel) ?? unitById('m'));
	}
}
