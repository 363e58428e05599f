import type { Knex } from 'knex';
import { DEMO_RUNS, type DemoRun } from '../src/lib/demo/demoRuns.ts';
import { writeRun } from '../src/lib/demo/writeRun.ts';
import { findViewerOfPerson } from '../src/lib/server/access/findViewer.ts';
import { newPublicId } from '../src/lib/server/db/publicId.ts';
import { receiveUpload } from '../src/lib/server/upload/receiveUpload.ts';
import { nameLayout } from './demoLayouts.ts';
import { DEMO_PEOPLE, seedPeople, seedTeam, type DemoPerson } from './demoPeople.ts';
import { seedCoaching } from './seedCoaching.ts';

/** The run whose best lap is the coach's reference; it comes first, so that later runs find its layout. */
const REFERENCE = 'reference';
const EVENT = 'Vallmere Park, 24 May';
/** The run that the coach wrote a debrief on, and the evening on which they did: the runs after it are scored. */
const DEBRIEFED = 'first';
const DEBRIEFED_AT = new Date('2026-05-03T19:30:00Z');

interface SeededRun {
	id: number;
	layoutId: number;
	bestLapId: number | null;
	ownerId: number;
}

export interface DemoTools {
	db: Knex;
	accountsPath: string;
	/** settles when every queued import has ended */
	worked: () => Promise<void>;
}

/**
 * Puts the demo in: people, team, who admits whom, and eight runs that take the same way in as anybody's file. Does nothing that an
 * earlier start has done.
 *
 * @throws {Error} when a run of the demo is refused: it is ours, so something is broken
 */
export async function seedDemo({ db, accountsPath, worked }: DemoTools): Promise<void> {
	const people = await seedPeople(db, accountsPath);
	const team = await seedTeam(db, people);
	const personOf = (key: DemoPerson['key']): number => {
		const id = people.get(key);
		if (id === undefined) throw new Error(`the demo requires a person ${key}`);
		return id;
	};
	const ownerOf = (run: DemoRun): number => {
		const person = DEMO_PEOPLE.find(({ name }) => name === run.driver.name);
		if (!person) throw new Error(`the demo requires an account of ${run.driver.name}`);
		return personOf(person.key);
	};

	const [reference, ...others] = [...DEMO_RUNS].sort(
		(a, b) => Number(b.key === REFERENCE) - Number(a.key === REFERENCE)
	);
	await handOver(db, reference, ownerOf(reference));
	await worked();
	const referenceRun = await describe(db, reference, ownerOf(reference));
	await nameLayout(db, referenceRun.layoutId, reference.circuit);
	const drivers = (['mira', 'jonas', 'tomas'] as const).map(personOf);
	for (const driver of drivers) {
		await admit(db, {
			owner_id: referenceRun.ownerId,
			grantee_person_id: driver,
			scope: 'run',
			run_id: referenceRun.id
		});
	}
	await admit(db, { owner_id: personOf('mira'), grantee_person_id: personOf('rhea'), scope: 'all' });

	for (const run of others) await handOver(db, run, ownerOf(run));
	await worked();
	const eventId = await seedEvent(db, team, referenceRun.layoutId);
	for (const run of others) {
		const seeded = await describe(db, run, ownerOf(run));
		if (seeded.layoutId !== referenceRun.layoutId) await nameLayout(db, seeded.layoutId, run.circuit);
		if (run.key.startsWith('stint')) await db('runs').where({ id: seeded.id }).update({ event_id: eventId });
	}
	for (const driver of drivers) {
		await admit(db, { owner_id: driver, grantee_organisation_id: team, scope: 'event', event_id: eventId });
	}
	await shelve(db, referenceRun);
	const debriefed = others.find(({ key }) => key === DEBRIEFED);
	if (!debriefed) throw new Error(`the demo requires a run ${DEBRIEFED}`);
	const { id: runId } = await describe(db, debriefed, ownerOf(debriefed));
	await seedCoaching(db, {
		coachId: personOf('rhea'),
		driverId: personOf('mira'),
		runId,
		agreedAt: DEBRIEFED_AT
	});
}

/** Uploads a run's file where the person has not handed it over yet. */
async function handOver(db: Knex, run: DemoRun, ownerId: number): Promise<void> {
	const before: unknown = await db('uploads')
		.where({ owner_id: ownerId, file_name: run.fileName })
		.whereNot({ state: 'receiving' })
		.first('id');
	if (before) return;
	const viewer = await findViewerOfPerson(db, ownerId);
	if (!viewer) throw new Error(`the demo requires an open account of ${run.driver.name}`);
	await receiveUpload(viewer, run.fileName, chunks(writeRun(run)));
}

async function* chunks(text: string): AsyncGenerator<Uint8Array> {
	yield new TextEncoder().encode(text);
}

/** Says of a run what its driver would: when, where, in what, to what end. */
async function describe(db: Knex, run: DemoRun, ownerId: number): Promise<SeededRun> {
	const row = await db('runs')
		.join('uploads', 'uploads.id', 'runs.upload_id')
		.where({ 'uploads.owner_id': ownerId, 'uploads.file_name': run.fileName })
		.first<{ id: number; layout_id: number; best_lap_id: number | null } | undefined>(
			'runs.id',
			'runs.layout_id',
			'runs.best_lap_id'
		);
	if (!row) {
		const upload = await db('uploads')
			.where({ owner_id: ownerId, file_name: run.fileName })
			.first<{ state: string; error: unknown } | undefined>('state', 'error');
		throw new Error(
			`the demo requires ${run.fileName} to be analysed, it is ${upload?.state}: ${JSON.stringify(upload?.error)}`
		);
	}
	const startedAt = new Date(run.startedAt);
	await db('runs')
		.where({ id: row.id })
		.whereNot({ conditions: 'dry' })
		.update({ started_at: startedAt, sort_at: startedAt, place: 'real', conditions: 'dry', intent: run.intent });
	return { id: row.id, layoutId: row.layout_id, bestLapId: row.best_lap_id, ownerId };
}

/** A grant, unless the same one stands, revoked or not: what a person took back stays taken back. */
async function admit(db: Knex, grant: Record<string, string | number>): Promise<void> {
	const before: unknown = await db('grants').where(grant).first('id');
	if (!before) await db('grants').insert({ ...grant, public_id: newPublicId(), created_by: grant.owner_id });
}

async function seedEvent(db: Knex, team: number, layoutId: number): Promise<number> {
	const event = { organisation_id: team, name: EVENT };
	const before = await db('events').where(event).first<{ id: number } | undefined>('id');
	if (before) return before.id;
	const [id]: number[] = await db('events').insert({
		...event,
		public_id: newPublicId(),
		layout_id: layoutId,
		starts_on: '2026-05-24',
		ends_on: '2026-05-24'
	});
	return id;
}

async function shelve(db: Knex, run: SeededRun): Promise<void> {
	const shelf = { person_id: run.ownerId, layout_id: run.layoutId };
	const before: unknown = await db('shelf_references').where(shelf).first('id');
	if (before || run.bestLapId === null) return;
	await db('shelf_references').insert({
		...shelf,
		public_id: newPublicId(),
		lap_id: run.bestLapId,
		name: 'Rhea Calloway, dry',
		created_by: run.ownerId
	});
}
