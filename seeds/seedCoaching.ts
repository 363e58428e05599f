import type { Knex } from 'knex';
import { findViewerOfPerson } from '../src/lib/server/access/findViewer.ts';
import type { Viewer } from '../src/lib/server/access/viewer.ts';
import { encodePublicId } from '../src/lib/server/db/publicId.ts';
import { loadDebriefGround } from '../src/lib/server/services/debriefFacts.ts';
import { answerDebrief, saveDebrief, sendDebrief, startDebrief } from '../src/lib/server/services/debriefsEdit.ts';
import { keepPhrase } from '../src/lib/server/services/debriefPhrases.ts';
import { openFocus } from '../src/lib/server/services/focusEdit.ts';
import { loadRun } from '../src/lib/server/services/loadRun.ts';
import { writeNote } from '../src/lib/server/services/zoneNotesEdit.ts';
import type { Target } from '../src/lib/schemas/target.ts';

/** What the coach asks for in the dearest corners, dearest first; each is counted from the reference, so that it fits any of them. */
const ASKS: { words: string; target: Pick<Target, 'kind' | 'least' | 'most'> }[] = [
	{
		words: 'Firm, then let it go *slowly*. Squeeze, do not stamp, and breathe it out to the apex.',
		target: { kind: 'peak_brake', least: null, most: 8 }
	},
	{
		words: 'Be patient for one more car length, then open your hands and the throttle together.',
		target: { kind: 'full_throttle', least: null, most: 12 }
	},
	{
		words: 'It is wider than it looks from the crest. Brake once, lightly, and look at the exit.',
		target: { kind: 'minimum_speed', least: -3, most: null }
	}
];

/** Laps of a run's last ones that must meet a target before it may be closed. */
const HOLDS_OVER = { laps: 5, of: 7 };

interface CoachingOf {
	coachId: number;
	driverId: number;
	/** the driver's run that the debrief is on */
	runId: number;
	/** when they agreed on it: laps driven later are scored */
	agreedAt: Date;
}

/**
 * Writes what a coach would: zone notes on the dearest corners, a focus on each, phrases, and a sent debrief with the driver's answer.
 * Does nothing where the coach wrote a debrief on the run already.
 *
 * @throws {Error} when the run has nothing to lay it on: the demo is ours, so something is broken
 */
export async function seedCoaching(db: Knex, { coachId, driverId, runId, agreedAt }: CoachingOf): Promise<void> {
	const before: unknown = await db('debriefs').where({ author_id: coachId, run_id: runId }).first('id');
	if (before) return;
	const [coach, driver] = [await viewerOf(db, coachId), await viewerOf(db, driverId)];
	const row = await db('runs').where({ id: runId }).first<{ public_id: Buffer } | undefined>('public_id');
	if (!row) throw new Error(`the demo requires run ${runId}`);
	const run = await loadRun(coach, encodePublicId(row.public_id));
	if (!run.suggestion) throw new Error(`the demo requires a reference for run ${run.id}`);
	const { lap, reference } = run.suggestion;
	const { page } = await loadDebriefGround(coach, lap.id, reference.id, coach.name);
	const dearest = page.groups.lost.corners.slice(0, ASKS.length);
	for (const [i, number] of dearest.entries()) {
		const corner = run.corners.find((one) => one.number === number);
		if (!corner?.id) continue;
		const { words, target } = ASKS[i];
		const note = await writeNote(coach, {
			layout: run.layout.id,
			driver: run.driver.id,
			run: run.id,
			corner: corner.id,
			startM: Math.max(0, Math.round(corner.startM)),
			endM: Math.max(0, Math.round(corner.apexM)),
			body: words,
			target: {
				...target,
				base: 'reference',
				scope: { dryOnly: true, afterLap: null, holdsOver: HOLDS_OVER },
				notSlower: true,
				text: ''
			}
		});
		const input = { driver: run.driver.id, layout: run.layout.id, car: run.car?.id ?? null };
		await openFocus(coach, { ...input, corner: null, note: note.id, target: null }, agreedAt);
	}
	await keepPhrase(coach, {
		code: 'brake_early',
		body: '{driver}, trust the brake: come to {corner} a little deeper, a car’s length at a time.'
	});
	const draft = await startDebrief(coach, { run: run.id, lap: lap.id, reference: reference.id });
	const [name] = run.driver.name.split(' ');
	const { revision } = await saveDebrief(coach, draft.id, {
		revision: draft.revision,
		content: {
			...draft.document.content,
			opening: `${name}, a good hour. The car is not the question and neither is courage.\n\nMost of the gap sits in a few corners. Practise the release, not the hit, and leave everything else alone until it feels slow.`
		}
	});
	await sendDebrief(coach, draft.id, revision);
	await db('debriefs').where({ author_id: coachId, run_id: runId }).update({ sent_at: agreedAt });
	await answerDebrief(
		driver,
		draft.id,
		'Thank you. I could feel the front give up; I will try the slow release first.'
	);
}

async function viewerOf(db: Knex, personId: number): Promise<Viewer> {
	const viewer = await findViewerOfPerson(db, personId);
	if (!viewer) throw new Error(`the demo requires an open account of person ${personId}`);
	return viewer;
}
