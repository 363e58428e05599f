import type { Finding } from '../../schemas/analysisDocument.ts';
import type { AdviceGate, FindingCode } from '../../schemas/codes.ts';
import type { Circumstances } from './circumstances.ts';
import { DRILLS, type Drill } from './drills.ts';
import { withUnit } from './format.ts';

/** What may be said about one finding, and how. */
export interface Advice<F extends AdvisedFinding = Finding> {
	finding: F;
	/** the exercise; null where none may be said, or there is none */
	drill: string | null;
	/** m of one step, where the exercise moves a braking point */
	stepM: number | null;
	/** why nothing is said; empty where something is, or where there is nothing to say */
	gates: AdviceGate[];
	/** to be said with it */
	cautions: ('flat_spot' | 'cool_down')[];
}

export type AdvisedFinding = Pick<Finding, 'corner' | 'code' | 'evidence'>;

/** Half of the gap, and never more than this at a time. */
export const LARGEST_STEP_M = 5;
const STEP_SHARE = 0.5;
/** Below this a step is none. */
const LEAST_STEP_M = 0.5;
/** Tyres and driver are not warm before. */
export const FIRST_LAPS = 2;

/** Saving fuel is done by these. */
const SAVES_FUEL: ReadonlySet<FindingCode> = new Set([
	'coasting',
	'lift_extra',
	'brake_early',
	'pick_up_hesitant',
	'pedal_change_slow',
	'short_shift',
	'exit_speed_low'
]);
/** Warming tyres is done by these, or excuses them. */
const WARMS_TYRES: ReadonlySet<FindingCode> = new Set([
	'wheelspin',
	'scrub',
	'steering_corrections',
	'peak_over',
	'second_dab',
	'min_speed_low',
	'grip_unused',
	'brake_early',
	'lift_extra'
]);

/**
 * Decides which drafted advice may be said, and how: real or simulator, wet, cold, first laps, fade, rear brakes, beginners, intent, and
 * what a coach marked. Facts stay; only the exercise is withheld.
 *
 * A step towards a corner is at most half of the gap and 5 m. Whatever is not known counts as a real car.
 *
 * @param findings of one comparison: a rear lock in one corner takes trail advice away in all
 */
export function adviseOn<F extends AdvisedFinding>(findings: readonly F[], circumstances: Circumstances): Advice<F>[] {
	const lockedIn = new Set(findings.filter(({ code }) => code === 'lock_up').map(({ corner }) => corner));
	const rearLocks = findings.some(locksRear);
	return findings.map((finding): Advice<F> => {
		const drill = DRILLS[finding.code];
		const cautions: Advice['cautions'] =
			finding.code === 'lock_up' || finding.code === 'rear_lock' ? ['flat_spot'] : [];
		if (circumstances.fade && circumstances.place !== 'simulator') cautions.push('cool_down');
		const nothing = { finding, drill: null, stepM: null, cautions };
		if (!drill) return { ...nothing, gates: [] };
		const gates = gatesOf(finding, drill, circumstances, { slips: lockedIn.has(finding.corner), rearLocks });
		if (gates.length > 0) return { ...nothing, gates };
		const stepM = drill.text.includes('{step}') ? stepOf(finding) : null;
		if (stepM !== null && stepM < LEAST_STEP_M) return { ...nothing, gates: ['step_too_small'] };
		const step = stepM === null ? '' : withUnit(stepM, 'm', 0);
		return { finding, drill: drill.text.replace('{step}', step), stepM, gates: [], cautions };
	});
}

/** A rear wheel that locks, at a downshift or by the brake. */
const locksRear = ({ code, evidence }: AdvisedFinding): boolean =>
	code === 'rear_lock' || evidence.some(({ quantity }) => quantity === 'lock_rl' || quantity === 'lock_rr');

function gatesOf(
	{ corner, code }: AdvisedFinding,
	{ kind }: Drill,
	c: Circumstances,
	seen: { slips: boolean; rearLocks: boolean }
): AdviceGate[] {
	if (c.openRoad) return ['open_road'];
	if (c.neutralised) return ['neutralised'];
	const gates: AdviceGate[] = [];
	const add = (gate: AdviceGate, holds: boolean) => {
		if (holds) gates.push(gate);
	};
	add('saving_fuel', c.intent === 'fuel' && SAVES_FUEL.has(code));
	add('warming_tyres', c.intent === 'tyres' && WARMS_TYRES.has(code));
	const wet = c.conditions === 'wet' || c.conditions === 'damp';
	const isReal = c.place !== 'simulator';
	if (isReal && (kind === 'faster_in' || kind === 'harder')) {
		add('wet', wet);
		add('cold_tyres', c.coldTyres);
		add('first_laps', c.timedLap !== null && c.timedLap <= FIRST_LAPS);
		add('fade', c.fade);
		add('no_run_off', c.noRunOff.includes(corner));
	}
	if (isReal && kind === 'throttle') {
		add('wet', wet && code === 'lift_extra');
		add('cold_tyres', c.coldTyres && code === 'lift_extra');
		add('no_run_off', c.noRunOff.includes(corner) && code === 'lift_extra');
	}
	if (isReal && kind === 'softer') add('no_slip_evidence', !seen.slips);
	if (kind === 'trail' && !c.trailAllowed) {
		add('rear_brakes', c.rearBrakesOnly);
		add('wet', wet);
		add('rear_locks', seen.rearLocks);
		add('beginner', c.beginner);
	}
	return gates;
}

/** Half of the gap between two onsets, at most 5 m, in whole metres downwards; a reference that does not brake gives no step. */
function stepOf({ evidence }: AdvisedFinding): number {
	const place = evidence.find(({ quantity }) => quantity === 'onset' || quantity === 'lift');
	if (!place || place.driver === null || place.reference === null) return 0;
	return Math.floor(Math.min(STEP_SHARE * (place.reference - place.driver), LARGEST_STEP_M));
}
