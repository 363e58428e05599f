import { KMH_PER_MPH } from '../units.ts';
import { formatUnit } from './unit.ts';

export type SpeedUnit = 'kmh' | 'mph';

/** How a speed unit is written. */
export const SPEED_UNIT_TEXT: Record<SpeedUnit, string> = { kmh: 'km/h', mph: 'mph' };

/** A speed in the reader's unit, without changing what is stored (km/h). */
export function speedIn(speedKmh: number, unit: SpeedUnit) {
	return unit === 'mph' ? speedKmh / KMH_PER_MPH : speedKmh;
}

/**
 * A speed with its unit, whole unless told otherwise.
 *
 * @param speedKmh km/h; null and NaN become "–"
 */
export function formatSpeed(speedKmh: number | null | undefined, unit: SpeedUnit = 'kmh', decimals = 0) {
	const value = speedKmh === null || speedKmh === undefined ? null : speedIn(speedKmh, unit);
	return formatUnit(value, SPEED_UNIT_TEXT[unit], { decimals });
}
