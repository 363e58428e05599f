import type { Knex } from 'knex';
import type { DebriefInput, DebriefSave, DebriefView } from '../../schemas/debrief.ts';
import { writtenDebriefs } from '../access/coaching.ts';
import type { Viewer } from '../access/viewer.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { database } from '../db/database.ts';
import type { FoundDebrief } from '../db/debriefRepository.ts';
import { decodePublicId, encodePublicId, newPublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';
import { draftDebrief } from './debriefDraft.ts';
import { loadDebriefGround } from './debriefFacts.ts';
import { phrasesByCode } from './debriefPhrases.ts';
import { getDebrief, liveDocument, loadDebrief, whereOf } from './debriefs.ts';
import { tellOfAnswer, tellOfDebrief } from './debriefMail.ts';
import { loadFocusList } from './focus.ts';
import { findRun, loadRun } from './loadRun.ts';
import { loadNotes } from './zoneNotes.ts';

/**
 * Drafts a debrief on a run; one that the viewer has not sent yet is gone on with.
 *
 * @throws 404 when the run or a lap is not the viewer's to see; {RequestProblem} 409 when there is nothing to lay the run on
 */
export async function startDebrief(viewer: Viewer, input: DebriefInput): Promise<DebriefView> {
	const db = database();
	const row = (await findRun(db, viewer, input.run)) ?? notFound();
	const open = await db('debriefs')
		.where({ run_id: row.run_id, author_id: viewer.personId })
		.whereNull('sent_at')
		.whereNull('deleted_at')
		.orderBy('id')
		.first<{ public_id: Buffer } | undefined>('public_id');
	if (open) return await loadDebrief(viewer, encodePublicId(open.public_id));
	const run = await loadRun(viewer, input.run);
	const pair = {
		lap: input.lap ?? run.suggestion?.lap.id,
		reference: input.reference ?? run.suggestion?.reference.id
	};
	if (pair.lap === undefined || pair.reference === undefined) {
		throw new RequestProblem(409, 'conflict', 'a debrief requires a lap and a reference to lay it on', {
			remedy: 'Put a reference for this layout on your shelf'
		});
	}
	const ground = await loadDebriefGround(viewer, pair.lap, pair.reference, viewer.name);
	if (ground.view.driver.runId !== run.id) notFound();
	const [notes, focus, phrases] = await Promise.all([
		loadNotes(viewer, { layout: run.layout.id, driver: run.driver.id }),
		loadFocusList(viewer, run.driver.id),
		phrasesByCode(db, viewer.personId)
	]);
	const content = draftDebrief({
		ground,
		notes: notes.filter(({ author }) => author.id === viewer.publicId),
		focus: focus.points.filter(
			({ state, layout, car }) => state === 'open' && layout.id === run.layout.id && car?.id === run.car?.id
		),
		phrases,
		signature: viewer.name.split(' ')[0]
	});
	const publicId = newPublicId();
	await db('debriefs').insert({
		public_id: publicId,
		author_id: viewer.personId,
		driver_id: row.owner_id,
		run_id: row.run_id,
		lap_id: db('laps')
			.where({ public_id: decodePublicId(pair.lap) })
			.select('id'),
		reference_lap_id: db('laps')
			.where({ public_id: decodePublicId(pair.reference) })
			.select('id'),
		content: JSON.stringify(content)
	});
	return await loadDebrief(viewer, encodePublicId(publicId));
}

/**
 * Saves what the coach writes.
 *
 * @returns the new revision
 * @throws {RequestProblem} 409 with both texts when another window saved in between, or when it was sent: nothing is overwritten
 */
export async function saveDebrief(viewer: Viewer, debriefId: string, save: DebriefSave): Promise<{ revision: number }> {
	const db = database();
	const row = await getWritten(db, viewer, debriefId);
	return await retryOnDeadlock(db, async (trx) => {
		const now = await lock(trx, row.id);
		if (now.sent_at !== null) throw sentAlready();
		if (now.revision !== save.revision) {
			throw new RequestProblem(409, 'conflict', 'the debrief was changed in another window', {
				remedy: 'Look at both texts and choose which one stays',
				conflict: { revision: now.revision, theirs: now.content, yours: save.content }
			});
		}
		const revision = now.revision + 1;
		await trx('debriefs')
			.where({ id: row.id })
			.update({ content: JSON.stringify(save.content), revision });
		return { revision };
	});
}

/**
 * Sends a debrief: a frozen copy that the driver reads, and a letter. Sending it a second time changes nothing and tells nobody.
 *
 * @throws {RequestProblem} 409 when another window saved in between: nobody sends what they have not seen
 */
export async function sendDebrief(viewer: Viewer, debriefId: string, revision: number): Promise<DebriefView> {
	const db = database();
	const row = await getWritten(db, viewer, debriefId);
	if (row.sent_id === null) {
		const document = await liveDocument(viewer, row);
		await retryOnDeadlock(db, async (trx) => {
			const now = await lock(trx, row.id);
			if (now.sent_at !== null) return;
			if (now.revision !== revision || now.revision !== row.revision) {
				throw new RequestProblem(409, 'conflict', 'the debrief was changed in another window', {
					remedy: 'Read it again before you send it',
					conflict: { revision: now.revision, theirs: now.content, yours: null }
				});
			}
			await trx('sent_debriefs').insert({ debrief_id: row.id, document: JSON.stringify(document) });
			await trx('debriefs')
				.where({ id: row.id })
				.update({ sent_at: trx.raw('CURRENT_TIMESTAMP(3)') });
			await trx('in_tray_marks')
				.insert({ coach_id: viewer.personId, run_id: row.run_id, closed_at: trx.raw('CURRENT_TIMESTAMP(3)') })
				.onConflict(['coach_id', 'run_id'])
				.merge(['closed_at']);
			await tellOfDebrief(trx, row, document);
			await recordAudit(trx, {
				actorId: viewer.personId,
				action: 'debrief_sent',
				subject: { kind: 'debrief', id: debriefId }
			});
		});
	}
	return await loadDebrief(viewer, debriefId);
}

/** Takes a draft out of sight, or brings it back; what was sent stays with the driver. */
export async function setDebriefDeleted(viewer: Viewer, debriefId: string, deleted: boolean): Promise<void> {
	const db = database();
	const found = await db('debriefs')
		.join('runs', 'runs.id', 'debriefs.run_id')
		.where({ 'debriefs.public_id': decodePublicId(debriefId) ?? notFound() })
		.whereNull('debriefs.sent_at')
		.where(writtenDebriefs(db, viewer))
		.first<{ id: number } | undefined>('debriefs.id');
	if (!found) notFound();
	await db('debriefs')
		.where({ id: found.id })
		.update({ deleted_at: deleted ? db.raw('CURRENT_TIMESTAMP(3)') : null });
}

/** The driver has it before them: the first time counts. Others who open it leave no receipt. */
export async function readDebrief(viewer: Viewer, debriefId: string): Promise<void> {
	const db = database();
	const row = await getSent(db, viewer, debriefId);
	if (row.is_driver !== 1) return;
	await db('sent_debriefs')
		.where({ id: row.sent_id })
		.whereNull('read_at')
		.update({ read_at: db.raw('CURRENT_TIMESTAMP(3)') });
}

/** @throws 404 when it is not the viewer's to answer */
export async function answerDebrief(viewer: Viewer, debriefId: string, body: string): Promise<DebriefView> {
	const db = database();
	const row = await getSent(db, viewer, debriefId);
	await retryOnDeadlock(db, async (trx) => {
		await trx('debrief_replies').insert({ sent_debrief_id: row.sent_id, author_id: viewer.personId, body });
		await tellOfAnswer(trx, viewer, row, whereOf(row), body);
	});
	return await loadDebrief(viewer, debriefId);
}

/**
 * The driver ticks what they tried, or takes the tick away.
 *
 * @throws 404 when the viewer is not the driver, or nothing of that key was asked
 */
export async function tickTask(viewer: Viewer, debriefId: string, item: string, ticked: boolean): Promise<DebriefView> {
	const db = database();
	const row = await getSent(db, viewer, debriefId);
	const view = await loadDebrief(viewer, debriefId);
	if (row.is_driver !== 1 || !view.document.content.tasks.some(({ key }) => key === item)) notFound();
	const tick = { sent_debrief_id: row.sent_id, item };
	if (ticked) await db('debrief_ticks').insert(tick).onConflict().ignore();
	else await db('debrief_ticks').where(tick).delete();
	return await loadDebrief(viewer, debriefId);
}

/** A debrief that the viewer writes. */
async function getWritten(db: Knex, viewer: Viewer, debriefId: string): Promise<FoundDebrief> {
	const row = await getDebrief(db, viewer, debriefId);
	return row.author_id === viewer.personId ? row : notFound();
}

/** A debrief that was sent. */
export async function getSent(
	db: Knex,
	viewer: Viewer,
	debriefId: string
): Promise<FoundDebrief & { sent_id: number }> {
	const row = await getDebrief(db, viewer, debriefId);
	return row.sent_id === null ? notFound() : { ...row, sent_id: row.sent_id };
}

async function lock(
	trx: Knex.Transaction,
	id: number
): Promise<{ revision: number; sent_at: Date | null; content: unknown }> {
	return await trx('debriefs').where({ id }).forUpdate().first('revision', 'sent_at', 'content');
}

function sentAlready(): RequestProblem {
	return new RequestProblem(409, 'conflict', 'the debrief was sent, and what was sent stays as it is', {
		remedy: 'Write another debrief on the run'
	});
}
