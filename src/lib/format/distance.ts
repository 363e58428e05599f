import { formatNumber } from './number.ts';
import { NO_BREAK_SPACE } from './signs.ts';
import { formatUnit } from './unit.ts';

/** A place or a length in metres: "412 m", "3 621 m". */
export function formatDistance(distanceM: number | null | undefined, decimals = 0) {
	return formatUnit(distanceM, 'm', { decimals });
}

/** A stretch of the path: "405–440 m". */
export function formatStretch(fromM: number, toM: number) {
	return `${formatNumber(fromM)}–${formatNumber(toM)}${NO_BREAK_SPACE}m`;
}
