import '../helpers/server.ts';
import { rm } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { seedCoaching } from '../../seeds/seedCoaching.ts';
import { findViewerOfPerson } from '../../src/lib/server/access/findViewer.ts';
import type { Viewer } from '../../src/lib/server/access/viewer.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { environment } from '../../src/lib/server/environment.ts';
import { loadDebrief, loadDebriefs } from '../../src/lib/server/services/debriefs.ts';
import { loadFocusList } from '../../src/lib/server/services/focus.ts';
import { loadInTray, promiseDebrief, setTrayClosed } from '../../src/lib/server/services/inTray.ts';
import { loadNotes } from '../../src/lib/server/services/zoneNotes.ts';
import { makeGrant, makePerson, type TestPerson } from '../helpers/factories.ts';
import { storedRun, type StoredRun } from '../helpers/storedRun.ts';

const HOUR_MS = 3_600_000;
const db = database();
const now = Date.now();
let mira: TestPerson;
let rhea: TestPerson;
let coach: Viewer;
let driver: Viewer;
let first: StoredRun;
let second: StoredRun;

const viewerOf = async (person: TestPerson): Promise<Viewer> => {
	const viewer = await findViewerOfPerson(db, person.id);
	if (!viewer) throw new Error(`the test requires ${person.name}`);
	return viewer;
};
const drivenAt = (run: StoredRun, hours: number) =>
	db('runs')
		.where({ id: run.runId })
		.update({ sort_at: new Date(now + hours * HOUR_MS), conditions: 'dry' });

beforeAll(async () => {
	[mira, rhea] = [await makePerson(), await makePerson('Rhea Calloway')];
	const reference = await storedRun(rhea);
	await makeGrant(rhea, { to: mira, scope: 'run', runId: reference.runId });
	await makeGrant(mira, { to: rhea });
	// Mira's clean laps are the fixture's slower ones; the quickest is the coach's: so there is time to be found.
	const [quickest] = await db('laps')
		.whereIn('id', reference.lapIds)
		.orderBy('time_us')
		.limit(1)
		.select('id', 'time_us');
	const CLEARLY_US = 300_000;
	await db('shelf_references').insert({
		public_id: Buffer.alloc(16, 3),
		person_id: rhea.id,
		layout_id: reference.layoutId,
		lap_id: quickest.id,
		name: 'Rhea Calloway, dry',
		created_by: rhea.id
	});
	[first, second] = [await storedRun(mira, reference), await storedRun(mira, reference)];
	for (const { runId } of [first, second]) {
		await db('laps')
			.where({ run_id: runId })
			.where('time_us', '<', quickest.time_us + CLEARLY_US)
			.update({ is_clean: false });
		const best = db('laps').where({ run_id: runId, is_clean: true }).orderBy('time_us').limit(1);
		await db('runs')
			.where({ id: runId })
			.update({ best_lap_id: best.clone().select('id'), best_time_us: best.select('time_us') });
	}
	await drivenAt(first, -10);
	await drivenAt(second, -2);
	[coach, driver] = [await viewerOf(rhea), await viewerOf(mira)];
}, 120_000);

afterAll(async () => {
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

describe('the coach’s day', () => {
	it('begins in the in-tray: oldest promise first, what is new, and not the runs of who coaches one', async () => {
		const waiting = (await loadInTray(coach)).map(({ run }) => run.id);
		expect(new Set(waiting)).toEqual(new Set([first.runPublicId, second.runPublicId]));
		await promiseDebrief(coach, second.runPublicId, new Date(now - HOUR_MS));
		const [item, later] = await loadInTray(coach);
		expect(item).toMatchObject({ run: { id: second.runPublicId }, promised: true, isFirst: false, hasNews: false });
		expect(later).toMatchObject({ run: { id: first.runPublicId }, promised: false, isFirst: true, hasNews: true });
		expect(await loadInTray(driver)).toEqual([]);
	});

	it('closes a run with nothing new, and has it back', async () => {
		await setTrayClosed(coach, second.runPublicId, true);
		expect((await loadInTray(coach)).map(({ run }) => run.id)).toEqual([first.runPublicId]);
		await setTrayClosed(coach, second.runPublicId, false);
		expect(await loadInTray(coach)).toHaveLength(2);
	});

	it('goes from notes and focus to a debrief that the driver reads, and the next run is scored', async () => {
		const agreedAt = new Date(now - 5 * HOUR_MS);
		const of = { coachId: rhea.id, driverId: mira.id, runId: first.runId, agreedAt };
		await seedCoaching(db, of);
		await seedCoaching(db, of);
		const [head, ...others] = await loadDebriefs(driver);
		expect(others).toEqual([]);
		const debrief = await loadDebrief(driver, head.id);
		expect(debrief.isDriver).toBe(true);
		expect(debrief.replies).toHaveLength(1);
		const notes = await loadNotes(driver, { layout: first.layoutPublicId });
		const { points } = await loadFocusList(driver);
		expect(notes.length).toBeGreaterThan(0);
		expect(points).toHaveLength(notes.length);
		expect(debrief.document.content.tasks.map(({ focus }) => focus).sort()).toEqual(points.map(({ id }) => id).sort());
		for (const { runs } of points) expect(runs.map(({ run }) => run)).toEqual([second.runPublicId]);
		expect(points.some(({ scored }) => scored > 0)).toBe(true);
		const [item, ...rest] = await loadInTray(coach);
		expect(rest, 'the run that has its debrief waits no more').toEqual([]);
		expect(item).toMatchObject({ run: { id: second.runPublicId }, hasNews: true });
		expect(item.focus.length).toBeGreaterThan(0);
	});
});
