import { formatUnit } from '../format/unit.ts';
import { SPEED_UNIT_TEXT, speedIn, type SpeedUnit } from '../format/speed.ts';
import { NOT_KNOWN } from '../format/signs.ts';
import type { CornerMetrics } from '../schemas/analysisDocument.ts';
import type { MetricReason } from '../schemas/codes.ts';
import type { PlacedCorner } from './placedCorner.ts';

/** One measured quantity of a corner, for both laps, as text. */
export interface NumberRow {
	key: string;
	name: string;
	driver: string;
	reference: string;
	/** driver minus reference; "same" within what the recordings can tell */
	difference: string;
}

type Field = Exclude<
	keyof CornerMetrics,
	'lap' | 'corner' | 'plusMinus' | 'reasons' | 'releaseProgressive' | 'lockWheels'
>;

interface Quantity {
	field: Field;
	name: string;
	unit: 'm' | '%' | 's' | 'speed';
	decimals: number;
	/** stands in the short table on the card */
	main?: boolean;
	/** a place on the path: written as a place on the lap */
	place?: boolean;
}

const QUANTITIES: Quantity[] = [
	{ field: 'onsetM', name: 'Brake on', unit: 'm', decimals: 0, main: true, place: true },
	{ field: 'peakPct', name: 'Peak brake', unit: '%', decimals: 0, main: true },
	{ field: 'riseS', name: 'Brake rise', unit: 's', decimals: 2 },
	{ field: 'releaseS', name: 'Release', unit: 's', decimals: 2 },
	{ field: 'releaseEndM', name: 'Brake off', unit: 'm', decimals: 0, main: true, place: true },
	{ field: 'trailS', name: 'Trail braking', unit: 's', decimals: 2 },
	{ field: 'liftM', name: 'Throttle off', unit: 'm', decimals: 0, place: true },
	{ field: 'turnInM', name: 'Turn-in', unit: 'm', decimals: 0, place: true },
	{ field: 'entryKmh', name: 'Entry speed', unit: 'speed', decimals: 1 },
	{ field: 'minKmh', name: 'Minimum speed', unit: 'speed', decimals: 1, main: true },
	{ field: 'minSpeedM', name: 'Slowest at', unit: 'm', decimals: 0, place: true },
	{ field: 'pickUpM', name: 'Throttle pick-up', unit: 'm', decimals: 0, main: true, place: true },
	{ field: 'fullThrottleM', name: 'Full throttle', unit: 'm', decimals: 0, place: true },
	{ field: 'coastingS', name: 'Coasting', unit: 's', decimals: 2 },
	{ field: 'exitKmh', name: 'Exit speed', unit: 'speed', decimals: 1, main: true },
	{ field: 'timeS', name: 'Time in the corner', unit: 's', decimals: 3 }
];

/** What stands in a cell that has no number, where the reason says more than a dash. */
const REASON_TEXT: Partial<Record<MetricReason, string>> = {
	no_channel: 'no channel',
	no_brake_here: 'no brake',
	no_lift_here: 'no lift',
	flat: 'flat',
	never_full: 'never full',
	not_released: 'not released',
	gap: 'gap',
	brake_switch: 'on/off brake'
};

export interface NumbersInput {
	places: PlacedCorner;
	lengthM: number;
	closed: boolean;
	speedUnit: SpeedUnit;
	/** only the rows of the short table */
	mainOnly?: boolean;
}

/** The corner's measures side by side; a quantity that neither lap has is left out. */
export function numbersTable({ places, lengthM, closed, speedUnit, mainOnly = false }: NumbersInput): NumberRow[] {
	const { driver, reference } = places;
	return QUANTITIES.filter((quantity) => quantity.main || !mainOnly).flatMap((quantity) => {
		const mine = driver?.[quantity.field] ?? null;
		const theirs = reference?.[quantity.field] ?? null;
		if (mine === null && theirs === null) return [];
		const unit = quantity.unit === 'speed' ? SPEED_UNIT_TEXT[speedUnit] : quantity.unit;
		const convert = (value: number): number => (quantity.unit === 'speed' ? speedIn(value, speedUnit) : value);
		const say = (value: number | null, metrics: CornerMetrics | null): string => {
			if (value === null) return REASON_TEXT[metrics?.reasons[quantity.field] ?? 'not_reached'] ?? NOT_KNOWN;
			const place = quantity.place && closed ? ((value % lengthM) + lengthM) % lengthM : value;
			return formatUnit(convert(place), unit, { decimals: quantity.decimals });
		};
		return [
			{
				key: quantity.field,
				name: quantity.name,
				driver: say(mine, driver),
				reference: say(theirs, reference),
				difference: difference(mine, theirs, quantity, unit, convert, driver, reference)
			}
		];
	});
}

function difference(
	mine: number | null,
	theirs: number | null,
	{ field, decimals }: Quantity,
	unit: string,
	convert: (value: number) => number,
	driver: CornerMetrics | null,
	reference: CornerMetrics | null
): string {
	if (mine === null || theirs === null) return '';
	const plusMinus = Math.hypot(driver?.plusMinus[field] ?? 0, reference?.plusMinus[field] ?? 0);
	const apart = convert(mine) - convert(theirs);
	if (Math.abs(mine - theirs) <= plusMinus || Number(apart.toFixed(decimals)) === 0) return 'same';
	return formatUnit(apart, unit, { decimals, signed: true });
}
