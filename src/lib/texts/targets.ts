import { unitOf } from '../analysis/targets/targetKinds.ts';
import { formatUnit } from '../format/unit.ts';
import type { Target, TargetKind, UnscoredReason } from '../schemas/target.ts';

/** What a target is about, as a form lists it. */
export const TARGET_KIND_TEXT: Record<TargetKind, string> = {
	peak_brake: 'peak brake',
	brake_rise: 'rise of the brake',
	one_application: 'one application of the brake',
	onset: 'brake point',
	lift: 'lift',
	turn_in: 'turn-in',
	release: 'release',
	trail_until: 'brake off',
	trail: 'trail braking',
	light_hold: 'light hold',
	minimum_speed: 'minimum speed',
	approach_speed: 'approach speed',
	exit_speed: 'exit speed',
	pick_up: 'throttle pick-up',
	full_throttle: 'full throttle',
	no_second_lift: 'no second lift',
	overlap: 'both pedals at once',
	coasting: 'coasting',
	idle_gap: 'idle gap',
	no_lock_up: 'no lock-up',
	steering_corrections: 'corrections of the steering',
	onset_spread: 'spread of the brake point',
	minimum_speed_spread: 'spread of the minimum speed',
	corner_time: 'corner time',
	lap_time: 'lap time',
	free: 'in words'
};

/** Places are before or after, times and levels at most or at least. */
const PLACES: ReadonlySet<TargetKind> = new Set([
	'onset',
	'lift',
	'turn_in',
	'trail_until',
	'pick_up',
	'full_throttle'
]);
/** Digits that each unit is told with. */
const DECIMALS = { '%': 0, s: 2, m: 0, 'km/h': 0, '': 0 } as const;

/**
 * A target in trade words, without its scope: "peak brake at most 75 %", "brake point between 405 m and 415 m".
 *
 * @example targetText(target) // "light hold at least 0.50 s"
 */
export function targetText({ kind, least, most, base, text }: Target): string {
	if (kind === 'free') return text;
	const name = TARGET_KIND_TEXT[kind];
	if (least === null && most === null) return name;
	const unit = unitOf(kind);
	const decimals = kind === 'lap_time' ? 3 : DECIMALS[unit];
	const told = (value: number) =>
		base === 'value' ? formatUnit(value, unit, { decimals }) : formatUnit(value, unit, { decimals, signed: true });
	const from = base === 'own_median' ? ' against your usual' : base === 'reference' ? ' against the reference' : '';
	if (least !== null && most !== null) return `${name} between ${told(least)} and ${told(most)}${from}`;
	const isPlace = PLACES.has(kind);
	if (most !== null) return `${name} ${isPlace ? 'not after' : 'at most'} ${told(most)}${from}`;
	return `${name} ${isPlace ? 'not before' : 'at least'} ${told(least ?? 0)}${from}`;
}

/** When a target counts: "dry laps only, after lap 2, 4 of 5 laps"; null where it always does. */
export function targetScopeText({ scope }: Target): string | null {
	const parts = [
		scope.dryOnly ? 'dry laps only' : null,
		scope.afterLap ? `after lap ${scope.afterLap}` : null,
		scope.holdsOver ? `${scope.holdsOver.laps} of ${scope.holdsOver.of} laps` : null
	].filter((part) => part !== null);
	return parts.length > 0 ? parts.join(', ') : null;
}

/** Why a lap says nothing about a target. */
export const UNSCORED_TEXT: Record<UnscoredReason, string> = {
	free_text: 'judged by people',
	not_dry: 'not a dry lap',
	early_lap: 'before the laps that count',
	not_clean: 'not a clean lap',
	neutralised: 'neutralised',
	not_measured: 'not measured on this lap',
	no_base: 'nothing to count from yet',
	too_few_laps: 'too few laps for a spread'
};
