import type { Knex } from 'knex';
import type { RunDescription } from '../../schemas/api.ts';
import { seenLayouts } from '../access/seenLayouts.ts';
import { keptPeople, seenOwners } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { findOrMakeCar } from '../db/carRepository.ts';
import { database } from '../db/database.ts';
import { decodePublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import type { FoundRun } from '../db/runRepository.ts';
import { notFound } from '../http/notFound.ts';
import { readAgain } from '../upload/readAgain.ts';
import { findRun } from './loadRun.ts';

/**
 * Writes down what a person says of a run.
 *
 * @throws 404 when there is no such run, or it is not in the viewer's care: seeing a run is not enough
 */
export async function describeRun(viewer: Viewer, runId: string, said: RunDescription): Promise<void> {
	const db = database();
	const run = await getKeptRun(db, viewer, runId);
	await retryOnDeadlock(db, async (trx) => {
		const row: Record<string, string | number | Date | null> = {};
		for (const [column, value] of [
			['place', said.place],
			['conditions', said.conditions],
			['intent', said.intent],
			['tyre_set', said.tyreSet],
			['fuel_kg', said.fuelKg]
		] as const) {
			if (value !== undefined) row[column] = value;
		}
		if (said.car !== undefined)
			row.car_id = said.car === null ? null : await findOrMakeCar(trx, run.owner_id, said.car);
		if (said.startedAt !== undefined) {
			row.started_at = said.startedAt === null ? null : new Date(said.startedAt);
			row.sort_at = row.started_at ?? run.created_at;
		}
		if (said.layout !== undefined) row.chosen_layout_id = await getLayoutId(trx, viewer, said.layout);
		if (Object.keys(row).length > 0) await trx('runs').where({ id: run.run_id }).update(row);
		// The numbers are places on the layout's path, so that they are measured anew.
		if (said.layout !== undefined && run.upload_id !== null) await readAgain(trx, run.upload_id);
	});
}

/**
 * Takes a run out of sight; its file stays, and so does the row, so that it can be brought back.
 *
 * @throws 404 as `describeRun`
 */
export async function deleteRun(viewer: Viewer, runId: string): Promise<void> {
	const db = database();
	const run = await getKeptRun(db, viewer, runId);
	await retryOnDeadlock(db, async (trx) => {
		await trx('runs')
			.where({ id: run.run_id })
			.update({ deleted_at: trx.raw('CURRENT_TIMESTAMP(3)') });
		await recordAudit(trx, { actorId: viewer.personId, action: 'run_deleted', subject: { kind: 'run', id: runId } });
	});
}

/**
 * Brings back a run that was deleted by itself or with its upload; not one whose upload is still deleted.
 *
 * @throws 404 when there is nothing to bring back
 */
export async function restoreRun(viewer: Viewer, runId: string): Promise<void> {
	const db = database();
	const publicId = decodePublicId(runId) ?? notFound();
	const kept = await keptPeople(db, viewer);
	const run = await db('runs')
		.leftJoin('uploads', 'uploads.id', 'runs.upload_id')
		.where({ 'runs.public_id': publicId })
		.whereIn('runs.owner_id', kept)
		.whereNull('uploads.deleted_at')
		.first<{ id: number } | undefined>('runs.id');
	if (!run) notFound();
	await retryOnDeadlock(db, (trx) => trx('runs').where({ id: run.id }).update({ deleted_at: null }));
}

/** @throws 404 when there is no such layout, or the viewer may not see it */
async function getLayoutId(trx: Knex.Transaction, viewer: Viewer, layoutId: string): Promise<number> {
	const publicId = decodePublicId(layoutId) ?? notFound();
	const layout = await trx('layouts')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.where({ 'layouts.public_id': publicId })
		.where(seenLayouts(trx, viewer, await seenOwners(trx, viewer)))
		.first<{ id: number } | undefined>('layouts.id');
	return layout?.id ?? notFound();
}

async function getKeptRun(db: Knex, viewer: Viewer, runId: string): Promise<FoundRun> {
	const run = (await findRun(db, viewer, runId)) ?? notFound();
	const kept = await keptPeople(db, viewer);
	return kept.includes(run.owner_id) ? run : notFound();
}
