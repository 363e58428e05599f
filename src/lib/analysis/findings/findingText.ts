import type { Evidence, Finding } from '../../schemas/analysisDocument.ts';
import type { FindingCode } from '../../schemas/codes.ts';
import { digitsFor, withUnit } from './format.ts';

/** A piece of a sentence; a reference value is set apart so that a page can mark it with the reference's pen. */
export interface TextPart {
	text: string;
	isReference: boolean;
}

/** Evidence as a sentence needs it: `driver` and `reference` carry their unit, `by` is the unsigned difference. */
interface Said {
	driver: TextPart;
	reference: TextPart;
	by: string;
	hasReference: boolean;
	hasDriver: boolean;
	at: string;
}

const plain = (text: string): TextPart => ({ text, isReference: false });

function say(evidence: Evidence): Said {
	const { quantity, unit, driver, reference, atM } = evidence;
	const digits = digitsFor(unit, driver, reference);
	const isPlace = unit === 'm' && quantity !== 'offset';
	const value = (x: number | null) => (x === null ? '' : isPlace ? placeText(x, digits) : withUnit(x, unit, digits));
	return {
		driver: plain(value(driver)),
		reference: { text: value(reference), isReference: true },
		by: driver === null || reference === null ? '' : withUnit(Math.abs(driver - reference), unit, digits),
		hasReference: reference !== null,
		hasDriver: driver !== null,
		at: atM === null ? '' : placeText(atM, 0)
	};
}

/** A corner that the line cuts has places before it: they count back from there, for nobody says "at minus three". */
function placeText(placeM: number, digits: number): string {
	return placeM < 0 ? `${withUnit(-placeM, 'm', digits)} before the line` : withUnit(placeM, 'm', digits);
}

type Words = string | TextPart;

/** `a, not b`; where the reference has no value, `a` alone. */
const against = (said: Said): Words[] => (said.hasReference ? [said.driver, ', not ', said.reference] : [said.driver]);

type Sentence = (find: (quantity: string) => Said | null, first: Said) => Words[];

const SENTENCES: Record<FindingCode, Sentence> = {
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
	rise_quick: (_, first) => ['Reaches the peak in ', ...against(first), '.'],
	second_dab: (_, first) => ['Further dabs on the brake: ', ...against(first), '.'],
	release_abrupt: (_, first) => ['Lets the brake go within ', ...against(first), '.'],
	release_long: (find, first) => {
		const end = find('releaseEnd');
		return ['Lets the brake go over ', ...against(first), ...(end ? ['; off it at ', ...against(end)] : []), '.'];
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
	second_lift: (_, first) => ['Lifts again after the pick-up for ', ...against(first), '.'],
	coasting: (find, first) => {
		const lift = find('lift');
		return ['Coasts ', ...against(first), ...(lift ? [': off the throttle at ', ...against(lift)] : []), '.'];
	},
	exit_speed_low: (find, first) => {
		const full = find('fullThrottle');
		return ['Leaves at ', ...against(first), ...(full ? ['; full throttle at ', ...against(full)] : []), '.'];
	},
	idle_gap: (_, first) => [
		'Neither turns nor accelerates hard for ',
		...against(first),
		', before the next corner of the chain.'
	],
	lock_up: (_, first) => ['Lock-ups: ', ...against(first), '. Check for a flat spot.'],
	line: (find, first) => {
		const offset = find('offset');
		const side = offset ? [`, ${offset.by} beside the reference’s line`] : [];
		return ['Turns a radius of ', ...against(first), `, at ${first.at}`, ...side, '.'];
	},
	grip_unused: (_, first) => ['Corners with ', ...against(first), `, at ${first.at}, on the same radius.`],
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

/**
 * A finding as a sentence in pieces: what was measured, at which place, against which value of the reference. It names no
 * remedy: a coach does. Minus is U+2212, units follow a no-break space.
 */
export function findingParts(finding: Pick<Finding, 'code' | 'evidence'>): TextPart[] {
	const { code, evidence } = finding;
	if (evidence.length === 0) return [];
	const find = (quantity: string): Said | null => {
		const found = evidence.find((piece) => piece.quantity === quantity);
		return found ? say(found) : null;
	};
	const parts: TextPart[] = [];
	for (const words of SENTENCES[code](find, say(evidence[0]))) {
		const part = typeof words === 'string' ? plain(words) : words;
		if (!part.text) continue;
		const last = parts.at(-1);
		if (last && !last.isReference && !part.isReference) last.text += part.text;
		else parts.push({ ...part });
	}
	return parts;
}

/** The same sentence as one string. */
export function findingText(finding: Pick<Finding, 'code' | 'evidence'>): string {
	return findingParts(finding)
		.map((part) => part.text)
		.join('');
}
