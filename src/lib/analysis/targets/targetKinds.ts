import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { TargetKind } from '../../schemas/target.ts';

export interface MeasuredKind {
	/** field of a corner's metrics that holds it */
	field: keyof CornerMetrics & string;
	unit: '%' | 's' | 'm' | 'km/h' | '';
	/** a place on the path: differences are taken the short way round the lap */
	isPlace: boolean;
}

/**
 * Kinds that one pass of a corner answers. What is not here is scored over a run (spreads), over a lap (its time) or by a person (free
 * words).
 */
export const MEASURED_KINDS = {
	peak_brake: { field: 'peakPct', unit: '%', isPlace: false },
	brake_rise: { field: 'riseS', unit: 's', isPlace: false },
	one_application: { field: 'dabs', unit: '', isPlace: false },
	onset: { field: 'onsetM', unit: 'm', isPlace: true },
	lift: { field: 'liftM', unit: 'm', isPlace: true },
	turn_in: { field: 'turnInM', unit: 'm', isPlace: true },
	release: { field: 'releaseS', unit: 's', isPlace: false },
	trail_until: { field: 'releaseEndM', unit: 'm', isPlace: true },
	trail: { field: 'trailS', unit: 's', isPlace: false },
	light_hold: { field: 'lightHoldS', unit: 's', isPlace: false },
	minimum_speed: { field: 'minKmh', unit: 'km/h', isPlace: false },
	approach_speed: { field: 'entryKmh', unit: 'km/h', isPlace: false },
	exit_speed: { field: 'exitKmh', unit: 'km/h', isPlace: false },
	pick_up: { field: 'pickUpM', unit: 'm', isPlace: true },
	full_throttle: { field: 'fullThrottleM', unit: 'm', isPlace: true },
	no_second_lift: { field: 'secondLiftS', unit: 's', isPlace: false },
	overlap: { field: 'overlapS', unit: 's', isPlace: false },
	coasting: { field: 'coastingS', unit: 's', isPlace: false },
	idle_gap: { field: 'idleGapS', unit: 's', isPlace: false },
	no_lock_up: { field: 'lockUps', unit: '', isPlace: false },
	steering_corrections: { field: 'steerCorrections', unit: '', isPlace: false },
	corner_time: { field: 'timeS', unit: 's', isPlace: false }
} as const satisfies Partial<Record<TargetKind, MeasuredKind>>;

export type MeasuredTargetKind = keyof typeof MEASURED_KINDS;

/** Kinds that ask how far one value spreads over a run's laps, and which value. */
export const SPREAD_KINDS = {
	onset_spread: 'onset',
	minimum_speed_spread: 'minimum_speed'
} as const satisfies Partial<Record<TargetKind, MeasuredTargetKind>>;

export function isMeasured(kind: TargetKind): kind is MeasuredTargetKind {
	return kind in MEASURED_KINDS;
}

export function isSpread(kind: TargetKind): kind is keyof typeof SPREAD_KINDS {
	return kind in SPREAD_KINDS;
}

/** Unit of a target's limits. */
export function unitOf(kind: TargetKind): MeasuredKind['unit'] {
	if (isMeasured(kind)) return MEASURED_KINDS[kind].unit;
	if (isSpread(kind)) return MEASURED_KINDS[SPREAD_KINDS[kind]].unit;
	return kind === 'lap_time' ? 's' : '';
}
