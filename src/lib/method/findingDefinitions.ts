import { LEAST_GRIP_SHARE, LEAST_HESITATION_M, LEAST_SPIN_S } from '../analysis/findings/causes.ts';
import { DRILLS } from '../analysis/findings/drills.ts';
import { SHORT_SHARE } from '../analysis/findings/gears.ts';
import * as own from '../analysis/findings/ownLapCauses.ts';
import { LEAST_MORE_DEG, MORE_STEERING } from '../analysis/findings/scrub.ts';
import * as technique from '../analysis/findings/techniques.ts';
import { findingCodeSchema, type FindingCode } from '../schemas/codes.ts';
import { COMMON_PRACTICE, OWN_DEFINITION, type Definition, type DefinitionGroup } from './definition.ts';

type Told = Pick<Definition, 'term' | 'meaning' | 'limits'>;

const share = (value: number): string => `${Math.round(100 * value)} %`;

/** When each finding is named. Limits stand in the same constants that the findings are judged by. */
export const FINDING_MEANINGS: Record<FindingCode, Told> = {
	brake_early: {
		term: 'Early braking',
		meaning: 'The onset, or the lift, comes before the reference’s by more than its ±.'
	},
	brake_late: {
		term: 'Late braking',
		meaning:
			'The onset comes after the reference’s by more than its ±. It is charged with what follows from it, less what it found.'
	},
	peak_over: {
		term: 'Over-braking',
		meaning: `A peak over the reference’s by ${technique.LEAST_PEAK_PCT} % of full pedal, or by more than its ± where it cost time.`,
		limits: 'Not said where full pressure is only guessed from the run.'
	},
	peak_under: {
		term: 'Under-braking',
		meaning:
			'A lower peak that slows the car less, so that the braking has to begin earlier; the part of the earlier onset that it explains.'
	},
	harder_no_gain: {
		term: 'Harder brings no more',
		meaning: `In at least ${own.LEAST_HARDER_LAPS} clean laps the peak is over the reference’s by ${own.LEAST_HARDER_PCT} %, and at the same arrival speed the car slows no harder.`,
		limits: 'The tyres’ limit, a system, fade and falling downforce look alike.'
	},
	rise_quick: {
		term: 'Quick rise',
		meaning: `The peak is reached in under ${share(technique.QUICK_RISE_SHARE)} of the reference’s time, and at least ${technique.LEAST_RISE_S} s sooner.`
	},
	second_dab: {
		term: 'Second dab, pulsing',
		meaning: 'The brake is let go by a fifth of its peak and pressed again, where the reference presses once.'
	},
	pedal_change_slow: {
		term: 'Slow change of pedals',
		meaning: `Over ${technique.LEAST_CHANGE_S} s longer between throttle and brake than the reference, and at most ${technique.LONGEST_CHANGE_S} s in all; more is coasting.`
	},
	pedal_overlap: {
		term: 'Overlap',
		meaning: `Both pedals over 5 % for ${technique.LEAST_OVERLAP_S} s longer than in the reference.`
	},
	release_abrupt: {
		term: 'Abrupt release',
		meaning: `The release takes under ${share(technique.ABRUPT_RELEASE_SHARE)} of the reference’s time, and at least ${technique.LEAST_RELEASE_S} s less.`
	},
	release_long: {
		term: 'Long release',
		meaning: `The release takes over ${share(technique.LONG_RELEASE_SHARE)} of the reference’s time, and at least ${technique.LEAST_RELEASE_S} s more.`
	},
	release_uneven: {
		term: 'Uneven release',
		meaning: 'The release is not progressive where the reference’s is: its slope rises again on the way.'
	},
	hold_missing: {
		term: 'Light hold missing',
		meaning: `The reference holds the brake lightly for ${technique.LEAST_HOLD_S} s more, and the driver not at all.`
	},
	hold_short: {
		term: 'Light hold too short',
		meaning: `Under half of the reference’s light hold, and at least ${technique.LEAST_HOLD_S} s less.`
	},
	hold_strong: {
		term: 'Hold too strong',
		meaning: `A level above ${technique.LIGHT_HOLD_PCT} % is held while turning, where the reference holds lightly.`
	},
	min_speed_low: {
		term: 'Over-slowing',
		meaning:
			'The lowest speed is below the reference’s by more than its ±, and the time lost from there on follows from it.',
		limits: 'An outcome: the release, or the coasting, beside it is what a driver can change.'
	},
	entry_fast: {
		term: 'Too much speed in',
		meaning:
			'Over 2 km/h faster at the corner’s start, and then later at the lowest speed or at the throttle: charged with both.'
	},
	pick_up_late: { term: 'Late pick-up', meaning: 'The throttle comes after the reference’s by more than its ±.' },
	pick_up_hesitant: {
		term: 'Hesitant pick-up',
		meaning: `Full throttle comes ${LEAST_HESITATION_M} m or more after the reference’s, though the pick-up is no later, and the exit is slower.`
	},
	second_lift: { term: 'Second lift', meaning: 'After the pick-up the throttle falls by over 20 % for over 0.5 s.' },
	lift_extra: {
		term: 'Lift where the reference does not',
		meaning: 'The throttle falls below 95 % for a corner that the reference takes without a lift.'
	},
	coasting: {
		term: 'Coasting too long',
		meaning:
			'More coasting than the reference by more than its ±, with its three shares: before the brake, between the pedals, after the brake.'
	},
	exit_speed_low: {
		term: 'Poor exit',
		meaning:
			'A lower exit speed that no later pick-up, spin or scrub explains; the straight behind is named from 400 m on.'
	},
	wheelspin: {
		term: 'Wheelspin',
		meaning: `A wheel turns over 10 % faster than the ground on the throttle, for ${LEAST_SPIN_S} s longer than in the reference.`,
		limits: 'Never claimed without wheel speeds.'
	},
	scrub: {
		term: 'Scrub',
		meaning: `From the apex on over ${share(MORE_STEERING - 1)} and ${LEAST_MORE_DEG}° more steering than the reference, with no more curvature and no more lateral acceleration.`,
		limits: 'Needs steering and positions.'
	},
	steering_corrections: {
		term: 'Corrections of the steering',
		meaning: `At least ${technique.LEAST_CORRECTIONS} more back-and-forth movements of 6° and more than in the reference.`
	},
	turn_in_early: { term: 'Early turn-in', meaning: `Over ${technique.LEAST_TURN_IN_M} m before the reference’s.` },
	turn_in_late: { term: 'Late turn-in', meaning: `Over ${technique.LEAST_TURN_IN_M} m after the reference’s.` },
	idle_gap: {
		term: 'Idle between linked corners',
		meaning: `An idle gap longer than the reference’s by more than its ±; without a cost it is said from ${technique.LEAST_IDLE_GAP_S} s on.`
	},
	chain_exit_low: {
		term: 'Exit of the chain given away',
		meaning: 'In linked corners more is lost out of the last one than was found before it.'
	},
	lock_up: {
		term: 'Wheel locked',
		meaning: 'More lock-ups than the reference; the wheels are named.',
		limits: 'Never claimed without wheel speeds.'
	},
	rear_lock: {
		term: 'Rear lock at a downshift',
		meaning: 'A rear wheel locks within 0.4 s after a shift down.',
		limits: 'Needs wheel speeds and gears.'
	},
	line: {
		term: 'Tighter line',
		meaning: 'A smaller radius in the middle at the same lateral acceleration.',
		limits: 'No metres to an edge: edges are not known.'
	},
	grip_unused: {
		term: 'Grip unused',
		meaning: `Less lateral acceleration on the same radius where that cost time, or under ${share(LEAST_GRIP_SHARE)} of the acceleration that the lap itself shows at that speed while the reference uses more of its own.`
	},
	gear_other: { term: 'Another gear', meaning: 'The gear at the apex is not the reference’s.' },
	short_shift: {
		term: 'Short shift',
		meaning: `The first shift up out of the corner comes under ${share(SHORT_SHARE)} of the reference’s engine speed, from the same gear.`
	},
	spread_onset: {
		term: 'Braking point from lap to lap',
		meaning: `Standard deviation of the onset over ${own.WIDE_ONSET_M} m in at least ${own.LEAST_SPREAD_LAPS} clean laps.`
	},
	spread_min_speed: {
		term: 'Minimum speed from lap to lap',
		meaning: `Standard deviation of the lowest speed over ${own.WIDE_MINIMUM_KMH} km/h in at least ${own.LEAST_SPREAD_LAPS} clean laps.`
	},
	car_or_wind: {
		term: 'Straight not explained',
		meaning: 'What a straight costs beyond arrival speed and the car’s own full throttle.'
	},
	carried_in: {
		term: 'Carried in',
		meaning: 'What an earlier corner’s findings cost in this one. It repeats their cost and stays out of sums.'
	}
};

const exercise = (code: FindingCode): string => {
	const drill = DRILLS[code];
	return drill ? ` Exercise: ${drill.text.replace('{step}', 'half of the gap, at most 5 m,')}` : '';
};

export const FINDING_DEFINITIONS: DefinitionGroup = {
	id: 'findings',
	title: 'Findings',
	lead: 'Each is a measured difference outside its ±, with its evidence. Exercises are drafts for a coach to weigh; circumstances can withhold them.',
	definitions: findingCodeSchema.options.map((code) => ({
		...FINDING_MEANINGS[code],
		meaning: FINDING_MEANINGS[code].meaning + exercise(code),
		source: DRILLS[code] ? `${OWN_DEFINITION}; the exercise: ${COMMON_PRACTICE}` : OWN_DEFINITION
	}))
};
