import { capitalise, countInWords, countOf, listInWords } from '../format/count.ts';
import { formatDistance } from '../format/distance.ts';
import { formatSpeed, type SpeedUnit } from '../format/speed.ts';
import { formatUnit } from '../format/unit.ts';
import type { Finding } from '../schemas/analysisDocument.ts';
import type { FindingCode } from '../schemas/codes.ts';
import type { ComparisonView } from '../schemas/views.ts';
import { cornerInWords } from './cornerTitle.ts';
import { orderedFindings } from './findingLines.ts';

/** The conclusion that opens the compare page: sentences in order, and the corner to begin with. */
export interface GapInWords {
	sentences: string[];
	/** the corner that the second sentence names; null where there is none to begin with */
	beginWith: number | null;
}

/** Below this two laps are one: rounding and sampling. */
const NOTHING_S = 0.02;
/** A corner counts as quicker or slower from here. */
const CLEAR_S = 0.01;
/** The corners that are named together hold at least this share of the gap, or there are four of them. */
const SHARE_NAMED = 2 / 3;
const MOST_NAMED = 4;
/** A cause is worth a clause from here; the second one where it costs at least this share of the first. */
const SAID_FROM_S = 0.01;
const SECOND_CAUSE_SHARE = 0.35;

/**
 * Says in words where the time went: "Four corners hold 73 % of it: 4, 8, 6 and 10. Begin at Tern Hairpin, where the brake
 * comes 12 m early and too hard. In three corners you are quicker than the reference."
 */
export function gapInWords(view: ComparisonView, speedUnit: SpeedUnit = 'kmh'): GapInWords {
	const { comparison } = view;
	const rows = comparison.ledger.filter((row) => row.corner > 0);
	const lost = rows.filter((row) => row.totalS > 0).sort((a, b) => b.totalS - a.totalS);
	const quicker = rows.filter((row) => row.totalS <= -CLEAR_S);
	const you = view.driver.own;
	const sentences: string[] = [];
	const gapS = comparison.deltaS;

	if (Math.abs(gapS) < NOTHING_S && (lost[0]?.totalS ?? 0) < NOTHING_S)
		return { sentences: ['The two laps take the same time, corner by corner.'], beginWith: null };
	if (Math.abs(gapS) < NOTHING_S) sentences.push('The two laps take the same time, but not in the same corners.');
	else if (gapS < 0) sentences.push(`${you ? 'You are' : `${view.driver.driver.name} is`} quicker than the reference.`);

	const runUpS = comparison.ledger.find((row) => row.corner === 0)?.totalS ?? 0;
	const named = whereItIs(lost, gapS);
	if (gapS >= NOTHING_S && runUpS > gapS / 2)
		sentences.push('More than half of it was brought along from the last corner of the lap before.');
	else if (named !== null) sentences.push(named);

	const worst = lost.find((row) => row.totalS >= CLEAR_S);
	if (worst) {
		const corner = view.corners.find((c) => c.number === worst.corner);
		const where = cornerInWords(corner ?? { number: worst.corner, name: null });
		const costly = orderedFindings(comparison, worst.corner).told.filter(
			({ number, shareS }) => number !== null && shareS >= SAID_FROM_S
		);
		const causes = costly
			.filter(({ shareS }) => shareS >= costly[0].shareS * SECOND_CAUSE_SHARE)
			.slice(0, 2)
			.map(({ finding }) => clause(finding, speedUnit))
			.filter((text) => text !== null);
		const said = [...new Set(causes)];
		const verb = gapS >= NOTHING_S ? 'Begin at' : 'There is still time at';
		sentences.push(
			said.length > 0
				? `${verb} ${where}, where ${listInWords(said)}.`
				: `${verb} ${where}: ${formatUnit(worst.totalS, 's', { decimals: 3 })} lost, without a single cause.`
		);
	}
	if (quicker.length > 0 && gapS >= NOTHING_S) {
		const who = you ? 'you are' : `${view.driver.driver.name.split(' ')[0]} is`;
		const places =
			quicker.length === 1
				? `At ${cornerInWords(view.corners.find((c) => c.number === quicker[0].corner) ?? { number: quicker[0].corner, name: null })}`
				: `In ${countInWords(quicker.length)} corners`;
		sentences.push(`${places} ${who} quicker than the reference.`);
	}
	return { sentences, beginWith: worst?.corner ?? null };
}

/** "Four corners hold 73 % of it: 4, 8, 6 and 10." Null where no corner loses enough to be named. */
function whereItIs(lost: { corner: number; totalS: number }[], gapS: number): string | null {
	const clear = lost.filter((row) => row.totalS >= CLEAR_S);
	if (clear.length === 0 || gapS < NOTHING_S) return null;
	let sum = 0;
	let count = 0;
	while (count < Math.min(clear.length, MOST_NAMED) && (count === 0 || sum < SHARE_NAMED * gapS))
		sum += clear[count++].totalS;
	const numbers = listInWords(clear.slice(0, count).map((row) => String(row.corner)));
	const share = Math.round((100 * sum) / gapS);
	const corners = capitalise(countOf(count, 'corner'));
	const hold = count === 1 ? 'holds' : 'hold';
	// What is found elsewhere can make a few corners cost more than the whole gap.
	if (share > 100) {
		const cost = count === 1 ? 'costs' : 'cost';
		return `${corners} ${cost} ${formatUnit(sum, 's', { decimals: 3 })}, more than the whole gap: ${numbers}.`;
	}
	return `${corners} ${hold} ${formatUnit(share, '%')} of it: ${numbers}.`;
}

/** A cause as a clause behind "where": facts only, never an instruction. Null where the code says nothing to a driver. */
export function clause(finding: Finding, speedUnit: SpeedUnit = 'kmh'): string | null {
	const first = finding.evidence.find((item) => item.driver !== null && item.reference !== null);
	const apart = first ? Math.abs((first.driver ?? 0) - (first.reference ?? 0)) : null;
	const metres = first?.unit === 'm' && apart !== null && apart >= 0.5 ? ` ${formatDistance(apart)}` : '';
	const slower = first?.unit === 'km/h' && apart !== null ? ` ${formatSpeed(apart, speedUnit)}` : '';
	const clauses: Partial<Record<FindingCode, string>> = {
		brake_early: `the brake comes${metres} early`,
		brake_late: `the brake comes${metres} late`,
		peak_over: 'the brake is pressed harder than the reference’s',
		peak_under: 'the brake stays lighter than the reference’s',
		harder_no_gain: 'the car slows no harder for the firmer brake',
		rise_quick: 'the brake goes on abruptly',
		second_dab: 'the brake is pressed twice',
		pedal_change_slow: 'the feet change slowly from throttle to brake',
		pedal_overlap: 'the pedals are pressed both at once',
		release_abrupt: 'the brake is let go abruptly',
		release_long: 'the brake is held on for long',
		hold_missing: 'the light hold to the apex is missing',
		release_uneven: 'the brake is let go in steps',
		hold_short: 'the light hold to the apex is short',
		hold_strong: 'the hold to the apex is too firm to be light',
		min_speed_low: `the slowest point is${slower} slower`,
		entry_fast: 'the entry is faster than the corner takes',
		pick_up_late: `the throttle comes${metres} late`,
		pick_up_hesitant: 'the throttle opens slowly',
		lift_extra: 'the throttle is lifted where the reference does not lift',
		second_lift: 'the throttle is lifted a second time',
		coasting: 'the car coasts',
		exit_speed_low: `the exit is${slower} slower`,
		wheelspin: 'a driven wheel spins',
		scrub: 'the front tyres scrub',
		steering_corrections: 'the steering is corrected',
		turn_in_early: `the turn-in comes${metres} early`,
		turn_in_late: `the turn-in comes${metres} late`,
		chain_exit_low: 'the first linked corners take the exit of the last',
		idle_gap: 'the car neither turns nor accelerates for a while',
		lock_up: 'a wheel locks',
		rear_lock: 'a rear wheel locks at a downshift',
		gear_other: 'the gear differs',
		short_shift: 'the shift up comes early',
		spread_onset: 'the brake comes at another place each lap',
		spread_min_speed: 'the lowest speed differs from lap to lap',
		line: 'the line differs',
		grip_unused: 'there is grip that goes unused'
	};
	return clauses[finding.code] ?? null;
}
