import { countsOnce } from '../../analysis/findings/countsOnce.ts';
import { adviseOn, type Advice } from '../../analysis/findings/adviseOn.ts';
import type { Circumstances } from '../../analysis/findings/circumstances.ts';
import { UNKNOWN_CIRCUMSTANCES } from '../../analysis/findings/circumstances.ts';
import { formatDay } from '../../format/date.ts';
import { formatLapTime } from '../../format/lapTime.ts';
import type { DebriefFacts } from '../../schemas/debrief.ts';
import type { ComparisonView, Intent } from '../../schemas/views.ts';
import { layoutName } from '../../texts/runs.ts';
import type { ComparePage } from '../../view/comparePage.ts';
import { FAIRNESS_TEXT } from '../../view/fairnessText.ts';
import type { Viewer } from '../access/viewer.ts';
import { loadComparePage } from './loadCompareModels.ts';
import { loadRun } from './loadRun.ts';

/** What a debrief is written on: the two laps, as they lie on each other now, and what may be advised. */
export interface DebriefGround {
	view: ComparisonView;
	page: ComparePage;
	facts: DebriefFacts;
	advice: Advice[];
}

const CAUTION_TEXT: Record<Advice['cautions'][number], string> = {
	flat_spot: 'A wheel locked: check the tyre for a flat spot before going on.',
	cool_down: 'The brakes show a sign of fade: cool them down and have them inspected before going on.'
};

/**
 * Lays the two laps of a debrief on each other and takes from them what the page shows.
 *
 * @param lapId of the driver
 * @throws as loadComparison: both laps are the viewer's to see
 */
export async function loadDebriefGround(
	viewer: Viewer,
	lapId: string,
	referenceId: string,
	coach: string
): Promise<DebriefGround> {
	const date = { now: new Date() };
	const { view, page } = await loadComparePage(viewer, lapId, referenceId, { speedUnit: 'kmh', date });
	const run = await loadRun(viewer, view.driver.runId);
	const advice = adviseOn(view.comparison.findings.filter(countsOnce), circumstancesOf(view, run.intent));
	const { driver, reference, comparison } = view;
	const day = run.startedAt ?? run.uploadedAt;
	const said = (time: string | null) => (time === null ? null : formatDay(time, date));
	const facts: DebriefFacts = {
		coach,
		driver: driver.driver.name,
		where: [layoutName(view.layout), driver.car?.name ?? null, `${formatDay(day, date)}, run\u00a0${run.runOfDay}`]
			.filter((part) => part !== null)
			.join(' · '),
		gapS: comparison.deltaS,
		lap: `lap\u00a0${driver.number}, ${formatLapTime(driver.timeS)}`,
		reference: [reference.shelfName ?? reference.driver.name, said(reference.startedAt), formatLapTime(reference.timeS)]
			.filter((part) => part !== null)
			.join(', '),
		ledger: comparison.ledger.map(({ corner, totalS }) => ({ corner, totalS })),
		plan: page.circuit && {
			widthPx: page.circuit.widthPx,
			heightPx: page.circuit.heightPx,
			outline: page.circuit.outline,
			line: page.circuit.line,
			figures: page.circuit.figures
		},
		corners: page.cards.map((card) => ({
			number: card.number,
			name: card.name,
			totalS: card.total.deltaS,
			parts: card.parts,
			drawing: { plan: card.plan, traces: card.traces, guides: card.guides, delta: card.delta }
		})),
		cautions: [
			...new Set([
				...advice.flatMap(({ cautions }) => cautions.map((caution) => CAUTION_TEXT[caution])),
				...view.fairness.map((note) => FAIRNESS_TEXT[note])
			])
		]
	};
	return { view, page, facts, advice };
}

/** Only the corners that a section speaks of are drawn; what is not drawn need not be kept. */
export function factsFor(facts: DebriefFacts, corners: readonly (number | null)[]): DebriefFacts {
	return { ...facts, corners: facts.corners.filter(({ number }) => corners.includes(number)) };
}

/** What is known of the lap. Nothing says yet whether somebody is a beginner, or a kart brakes on its rear axle alone. */
function circumstancesOf({ driver, runLaps }: ComparisonView, intent: Intent): Circumstances {
	const place = runLaps.findIndex(({ id }) => id === driver.id);
	return {
		...UNKNOWN_CIRCUMSTANCES,
		place: driver.place,
		conditions: driver.conditions,
		intent,
		neutralised: driver.reasons.includes('neutralised'),
		timedLap: place < 0 ? null : place + 1
	};
}
