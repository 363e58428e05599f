import type { FindingCode } from '../../schemas/codes.ts';

/** What an exercise asks of the driver: the gates of advice are by this. */
export type DrillKind =
	/** brake, lift or coast later, or carry more speed in */
	| 'faster_in'
	/** press harder */
	| 'harder'
	/** press less */
	| 'softer'
	/** brake on into the corner, or change how the brake comes off */
	| 'trail'
	/** earlier or more throttle */
	| 'throttle'
	/** takes no risk: timing of hands and feet, gears, sameness */
	| 'care';

export interface Drill {
	kind: DrillKind;
	/** the exercise a coach would set; `{step}` stands for the metres of one step */
	text: string;
}

/**
 * The exercise for each finding; null where there is nothing for a driver to do. One table, so that a coach can read and weigh all of
 * it. No line of it tells anybody to stay on the throttle through a corner.
 */
export const DRILLS: Record<FindingCode, Drill | null> = {
	brake_early: {
		kind: 'faster_in',
		text: 'Move the braking point {step} towards the corner, the same pressure, for three laps; keep it only if the minimum speed stays.'
	},
	brake_late: {
		kind: 'care',
		text: 'Brake at the reference’s place for three laps and look at the exit first; move back only when the pick-up has come forward.'
	},
	peak_over: {
		kind: 'softer',
		text: 'Three laps with a first pressure a tenth lower, at the same place; see whether the car slows as much.'
	},
	peak_under: {
		kind: 'harder',
		text: 'Brake at your own place, and raise the first pressure a little each lap; the car will be slow enough early, which tells how much there is.'
	},
	harder_no_gain: {
		kind: 'softer',
		text: 'Look for the lowest pressure that slows the car as hard: a tenth less each lap until it does not.'
	},
	rise_quick: {
		kind: 'care',
		text: 'Squeeze, do not hit: count “one” while the pressure builds, for three laps.'
	},
	second_dab: {
		kind: 'care',
		text: 'One press for the corner: choose the pressure before you brake and change it only downwards.'
	},
	pedal_change_slow: {
		kind: 'faster_in',
		text: 'Practise the change of feet on a straight in clear track: off the throttle and on the brake in one movement, the place unchanged.'
	},
	pedal_overlap: {
		kind: 'care',
		text: 'Three laps with attention on the other foot: off one pedal before the other moves, unless it is meant.'
	},
	release_abrupt: {
		kind: 'trail',
		text: 'Let the pedal come up as slowly as the hands turn in: halve the speed of the foot for three laps.'
	},
	release_long: {
		kind: 'trail',
		text: 'Begin to ease off at the same place and be off the brake a little earlier each lap, until the front begins to widen.'
	},
	release_uneven: {
		kind: 'trail',
		text: 'Say the levels aloud while easing off: twenty, fifteen, ten, five.'
	},
	hold_missing: {
		kind: 'trail',
		text: 'Keep the very last of the pressure for half a second after turning in, and feel the front take hold.'
	},
	hold_short: {
		kind: 'trail',
		text: 'Keep the last of the pressure a little longer each lap, to half a second and a little more.'
	},
	hold_strong: {
		kind: 'trail',
		text: 'Halve the pressure that you keep while turning; the weight of the foot is enough.'
	},
	min_speed_low: {
		kind: 'faster_in',
		text: 'Ease off the brake earlier from the same braking point, a little each lap, and let the car roll to the apex.'
	},
	entry_fast: {
		kind: 'care',
		text: 'Three laps a little slower in, with the throttle as early as it will come: compare the speed at the end of the next straight.'
	},
	pick_up_late: {
		kind: 'throttle',
		text: 'Aim to touch the throttle a car’s length earlier, lightly; if it has to come off again, the entry was too fast.'
	},
	pick_up_hesitant: {
		kind: 'throttle',
		text: 'Open the throttle in one smooth movement as the steering unwinds; wait with the first touch until that is possible.'
	},
	second_lift: {
		kind: 'care',
		text: 'Wait with the throttle until it can stay: once on, no way back, for three laps.'
	},
	lift_extra: {
		kind: 'throttle',
		text: 'Lift at the same place, a little less each lap, and stop where the car begins to ask for room.'
	},
	coasting: {
		kind: 'faster_in',
		text: 'Always one pedal: from the throttle straight to the brake, and from the brake to the first touch of throttle.'
	},
	exit_speed_low: {
		kind: 'throttle',
		text: 'Give up a little entry for three laps and look for the straightest way out; read the speed at the end of the straight.'
	},
	wheelspin: {
		kind: 'care',
		text: 'Open the throttle only as far as the wheels take it, and unwind the steering first.'
	},
	scrub: {
		kind: 'care',
		text: 'When the front widens, take steering off instead of adding it, and wait for the grip.'
	},
	steering_corrections: {
		kind: 'care',
		text: 'Slower hands at turn-in, one movement; look at the exit before you turn.'
	},
	turn_in_early: {
		kind: 'care',
		text: 'Wait one more beat before the hands move, at the same speed; use a mark beside the track.'
	},
	turn_in_late: {
		kind: 'care',
		text: 'Begin to turn a beat earlier and slower, at the same speed; use a mark beside the track.'
	},
	idle_gap: {
		kind: 'care',
		text: 'Look for something to do between the two corners: still turning, on the brake, or on the throttle.'
	},
	chain_exit_low: {
		kind: 'care',
		text: 'Plan the linked corners from the exit of the last one backwards: give up the first for three laps and read the speed at the end.'
	},
	lock_up: {
		kind: 'care',
		text: 'The first pressure a little lower and built up more gently; check for a flat spot before going on.'
	},
	rear_lock: {
		kind: 'care',
		text: 'Shift down later and one gear at a time, with the engine speed matched; check for a flat spot before going on.'
	},
	line: {
		kind: 'care',
		text: 'Three laps with the whole width on the way in; compare the radius in the middle.'
	},
	grip_unused: {
		kind: 'faster_in',
		text: 'The same line, a little more speed into the middle each lap, from an earlier release and not from a later braking.'
	},
	gear_other: {
		kind: 'care',
		text: 'Try the other gear for three laps and compare the speed at the end of the next straight.'
	},
	short_shift: {
		kind: 'care',
		text: 'Hold the gear to the reference’s engine speed for three laps, if the engine is meant to.'
	},
	spread_onset: {
		kind: 'care',
		text: 'Choose one mark beside the track and brake at it for five laps; being early is fine, being different is not.'
	},
	spread_min_speed: {
		kind: 'care',
		text: 'Five laps at the same speed through the corner rather than one fast one.'
	},
	car_or_wind: null,
	carried_in: null
};
