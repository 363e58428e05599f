import type { FindingCode } from '../../schemas/codes.ts';
import type { Said, TextPart } from './textPart.ts';

type Words = string | TextPart;

/** `a, not b`; where the reference has no value, `a` alone. */
const against = (said: Said): Words[] => (said.hasReference ? [said.driver, ', not ', said.reference] : [said.driver]);

/** A value between words; nothing where it is not known. */
const times = (said: Said | null, before: string, behind: string): Words[] =>
	said ? [before, said.driver, behind] : [];

const WHEEL_NAMES = [
	['fl', 'the front left'],
	['fr', 'the front right'],
	['rl', 'the rear left'],
	['rr', 'the rear right']
] as const;

/** "the front left and the rear left"; null where no wheel is known. */
function wheelsOf(find: (quantity: string) => Said | null): string | null {
	const names = WHEEL_NAMES.filter(([wheel]) => find(`lock_${wheel}`)).map(([, name]) => name);
	if (names.length === 0) return null;
	return names.length === 1 ? names[0] : `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`;
}

type Sentence = (find: (quantity: string) => Said | null, first: Said) => Words[];

/** What a finding says, by its code: facts at places, against the reference's. It names no remedy. */
export const SENTENCES: Record<FindingCode, Sentence> = {
	brake_early: (find, first) => {
		const lift = find('onset') === null;
		const verb = lift ? 'Lifts' : 'Brakes';
		if (!first.hasReference)
			return [`${verb} at `, first.driver, `, where the reference does not ${lift ? 'lift' : 'brake'}.`];
		return [`${verb} ${first.by} early: at `, ...against(first), '.'];
	},
	brake_late: (_, first) => [`Brakes ${first.by} late: at `, ...against(first), '.'],
	peak_over: (find, first) => {
		const slows = find('deceleration');
		return ['Peaks at ', ...against(first), slows ? ', yet slows no harder: it brings nothing more.' : '.'];
	},
	peak_under: (find, first) => {
		const onset = find('onset');
		const slows = find('deceleration');
		return [
			'Peaks at ',
			...against(first),
			...(slows ? [': slows down with ', ...against(slows)] : []),
			...(onset ? [`, and so brakes ${onset.by} early, at `, ...against(onset)] : []),
			'.'
		];
	},
	harder_no_gain: (find, first) => [
		'Peaks at ',
		...against(first),
		...times(find('laps'), ' in ', ' laps'),
		', and slows no harder',
		...times(find('deceleration'), ': ', ''),
		'. The tyres, a system or the brakes give no more.'
	],
	rise_quick: (_, first) => ['Reaches the peak in ', ...against(first), '.'],
	second_dab: (_, first) => ['Further dabs on the brake: ', ...against(first), '.'],
	pedal_change_slow: (_, first) => ['Takes ', ...against(first), ', to change from throttle to brake.'],
	pedal_overlap: (_, first) => ['Both pedals pressed for ', ...against(first), '.'],
	release_abrupt: (_, first) => ['Lets the brake go within ', ...against(first), '.'],
	release_long: (find, first) => {
		const end = find('releaseEnd');
		return ['Lets the brake go over ', ...against(first), ...(end ? ['; off it at ', ...against(end)] : []), '.'];
	},
	release_uneven: (_, first) => [
		'Lets the brake go unevenly, over ',
		first.driver,
		', where the reference eases it off ever more gently.'
	],
	hold_short: (_, first) => ['Holds the brake lightly for only ', ...against(first), '.'],
	hold_strong: (find, first) => {
		const hold = find('lightHold');
		return [
			'Holds the brake at ',
			...against(first),
			', while turning',
			...(hold?.hasReference ? [', where the reference holds it lightly for ', hold.reference] : []),
			'.'
		];
	},
	hold_missing: (_, first) => [
		first.hasDriver ? 'Holds the brake lightly for ' : 'No light hold of the brake',
		...(first.hasDriver ? against(first) : [', where the reference holds it for ', first.reference]),
		'.'
	],
	min_speed_low: (find, first) => {
		const end = find('releaseEnd');
		const coasting = find('coasting');
		return [
			'Slowest at ',
			...against(first),
			...(end ? ['; off the brake at ', ...against(end)] : []),
			...(coasting ? ['; coasts ', ...against(coasting)] : []),
			'.'
		];
	},
	entry_fast: (find, first) => {
		const pickUp = find('pickUp');
		return ['Arrives at ', ...against(first), ...(pickUp ? ['; on the throttle at ', ...against(pickUp)] : []), '.'];
	},
	pick_up_late: (_, first) => [
		...(first.hasReference
			? [`On the throttle ${first.by} late: at `, ...against(first)]
			: ['On the throttle at ', first.driver, ', where the reference never leaves it']),
		'.'
	],
	pick_up_hesitant: (find, first) => {
		const exit = find('exitSpeed');
		return [
			'Opens the throttle slowly: full at ',
			...against(first),
			...(exit ? ['; leaves at ', ...against(exit)] : []),
			'.'
		];
	},
	lift_extra: (find, first) => {
		const opening = find('smallestOpening');
		return [
			'Lifts at ',
			first.driver,
			...(opening ? [', to ', opening.driver] : []),
			', where the reference does not lift.'
		];
	},
	second_lift: (_, first) => ['Lifts again after the pick-up for ', ...against(first), '.'],
	coasting: (find, first) => {
		const lift = find('lift');
		const shares = [
			...times(find('coastBefore'), '', ' before the brake'),
			...times(find('coastBetween'), ', ', ' between the pedals'),
			...times(find('coastAfter'), ', ', ' after the brake')
		];
		if (shares[0] === ', ') shares.shift();
		return [
			'Coasts ',
			...against(first),
			...(lift ? [': off the throttle at ', ...against(lift)] : []),
			...(shares.length ? ['; of it ', ...shares] : []),
			'.'
		];
	},
	exit_speed_low: (find, first) => {
		const full = find('fullThrottle');
		return [
			'Leaves at ',
			...against(first),
			...(full ? ['; full throttle at ', ...against(full)] : []),
			...times(find('straight'), ', before ', ' of straight'),
			'.'
		];
	},
	wheelspin: (find, first) => {
		const exit = find('exitSpeed');
		return ['Spins a wheel for ', ...against(first), ...(exit ? ['; leaves at ', ...against(exit)] : []), '.'];
	},
	scrub: (find, first) => {
		const radius = find('radius');
		return [
			'Steers ',
			...against(first),
			', and turns no tighter',
			...(radius ? [': a radius of ', ...against(radius)] : []),
			'. The front tyres scrub.'
		];
	},
	steering_corrections: (_, first) => [
		'Corrects the steering ',
		first.driver,
		' times in the corner',
		...(first.hasReference ? [', not ', first.reference] : []),
		'.'
	],
	turn_in_early: (_, first) => [`Turns in ${first.by} early: at `, ...against(first), '.'],
	turn_in_late: (_, first) => [`Turns in ${first.by} late: at `, ...against(first), '.'],
	idle_gap: (_, first) => [
		'Neither turns nor accelerates hard for ',
		...against(first),
		', before the next corner of the chain.'
	],
	chain_exit_low: (find, first) => [
		'Finds ',
		first.driver,
		' in the linked corners',
		...times(find('fromCorner'), ' from ', ''),
		' on, and loses ',
		...times(find('chainLost'), '', ''),
		' out of the last one.'
	],
	lock_up: (find, first) => {
		const wheels = wheelsOf(find);
		return [...(wheels ? [`Locks ${wheels}. `] : []), 'Lock-ups: ', ...against(first), '. Check for a flat spot.'];
	},
	rear_lock: (find, first) => {
		const wheels = wheelsOf(find);
		return [`Locks ${wheels ?? 'a rear wheel'} at a downshift: `, ...against(first), ' times. Check for a flat spot.'];
	},
	gear_other: (_, first) => ['Takes the corner in gear ', ...against(first), '.'],
	short_shift: (_, first) => [`Shifts up at `, ...against(first), `, at ${first.at}.`],
	spread_onset: (_, first) => [
		'Brakes at places that differ by ',
		first.driver,
		' from lap to lap (standard deviation).'
	],
	spread_min_speed: (_, first) => [
		'The lowest speed differs by ',
		first.driver,
		' from lap to lap (standard deviation).'
	],
	line: (_, first) => ['Takes a tighter line: turns a radius of ', ...against(first), `, at ${first.at}.`],
	grip_unused: (find, first) => {
		const share = find('gripShare');
		return [
			'Corners with ',
			...against(first),
			`, at ${first.at}, on the same radius`,
			...(share ? ['; uses ', ...against(share), ' of the grip shown at that speed'] : []),
			'.'
		];
	},
	car_or_wind: (_, first) => [
		'Reaches ',
		...against(first),
		', at the end of the straight, which arrival speed and full throttle do not explain: car, tow or wind.'
	],
	carried_in: (find, first) => {
		const corner = find('fromCorner');
		return corner
			? ['Carried in from ', ...(corner.driver.text === '0' ? ['the run-up'] : ['corner ', corner.driver]), '.']
			: ['Brought along from the lap before: crosses the line at ', ...against(first), '.'];
	}
};
