import '../helpers/server.ts';
import { rm } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { findViewerOfPerson } from '../../src/lib/server/access/findViewer.ts';
import type { Viewer } from '../../src/lib/server/access/viewer.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { environment } from '../../src/lib/server/environment.ts';
import { findCandidates } from '../../src/lib/server/importing/findCandidates.ts';
import { claim, reap } from '../../src/lib/server/jobs/jobQueue.ts';
import { loadComparison } from '../../src/lib/server/services/loadComparison.ts';
import { loadNotebook } from '../../src/lib/server/services/loadNotebook.ts';
import { loadRun } from '../../src/lib/server/services/loadRun.ts';
import { loadRuns } from '../../src/lib/server/services/loadRuns.ts';
import { loadTrace } from '../../src/lib/server/services/loadTrace.ts';
import { loadUpload, loadUploads } from '../../src/lib/server/services/loadUpload.ts';
import { addMember, makeGrant, makeOrganisation, makePerson, type TestPerson } from '../helpers/factories.ts';
import { storedRun, type StoredRun } from '../helpers/storedRun.ts';
import { testRequest } from '../helpers/testRequest.ts';
import { signedIn } from '../helpers/factories.ts';

/** Tables that grow with use: no page may read one from end to end. (first_other is not among them: it ends with its first row.) */
const GROWING = new Set([
	'people',
	'runs',
	'laps',
	'best_laps',
	'best_runs',
	'same_day',
	'analyses',
	'lap_traces',
	'lap_corner_metrics',
	'uploads',
	'jobs',
	'grants',
	'memberships',
	'guardian_links',
	'sign_in_sessions',
	'api_tokens',
	'layouts',
	'circuits',
	'path_versions',
	'corner_maps',
	'corner_places',
	'corners',
	'cars',
	'shelf_references'
]);
/** Names that queries give to a second look at a table. */
const ALIASES: Record<string, string> = { best_laps: 'laps', best_runs: 'runs', same_day: 'runs' };
/** These find one row, or stop at the first. */
const ONE_ROW = new Set(['const', 'system', 'index_subquery', 'unique_subquery']);
/** What one page may at most look at in one table; a driver's whole season is less. */
const MOST_ROWS = 600;

const PEOPLE = 300;
const RUNS_EACH = 6;

const db = database();
let driver: TestPerson;
let coach: TestPerson;
let own: StoredRun;
let viewers: Viewer[];

/** Fills the tables with other people's runs: the driver's own, many times over. */
async function crowd(): Promise<void> {
	await db.raw(
		`INSERT INTO people (public_id, name) SELECT RANDOM_BYTES(16), CONCAT('Crowd ', seq) FROM seq_1_to_${PEOPLE}`
	);
	const ids: number[] = await db('people').where('name', 'like', 'Crowd %').pluck('id');
	const numbers = `SELECT seq AS n FROM seq_1_to_${RUNS_EACH}`;
	await db.raw(
		`INSERT INTO uploads (public_id, owner_id, file_name, storage_key, state, created_at)
		SELECT RANDOM_BYTES(16), people.id, 'x.csv', 'aa/xxxx', 'analysed', '2026-01-01' FROM people CROSS JOIN (${numbers}) AS numbers WHERE people.id IN (?)`,
		[ids]
	);
	await db.raw(
		`INSERT INTO runs (public_id, owner_id, upload_id, layout_id, sort_at, timed_laps)
		SELECT RANDOM_BYTES(16), owner_id, id, ?, DATE_ADD('2026-01-01', INTERVAL id HOUR), 8 FROM uploads WHERE owner_id IN (?)`,
		[own.layoutId, ids]
	);
	await db.raw(
		`INSERT INTO analyses (run_id, code_version, layout_id, path_version, map_version, sample_rate_hz, channels, warnings, lock_ups, brake_scale_assumed, speed_strip)
		SELECT id, 'x', layout_id, 1, 1, 60, '[]', '[]', '[]', 0, '{}' FROM runs WHERE owner_id IN (?)`,
		[ids]
	);
	await db.raw(
		`INSERT INTO laps (public_id, run_id, analysis_id, ordinal, number, kind, start_us, time_us, is_clean, reasons, cell_us, grid_length_m, grid_margin_m)
		SELECT RANDOM_BYTES(16), runs.id, analyses.id, numbers.n, numbers.n, 'timed', 0, 60000000 + runs.id, 1, '[]', '[]', 2200, 250
		FROM runs JOIN analyses ON analyses.run_id = runs.id CROSS JOIN (${numbers}) AS numbers WHERE runs.owner_id IN (?)`,
		[ids]
	);
	await db.raw(
		`UPDATE runs JOIN analyses ON analyses.run_id = runs.id JOIN laps ON laps.run_id = runs.id AND laps.number = 1
		SET runs.analysis_id = analyses.id, runs.best_lap_id = laps.id, runs.best_time_us = laps.time_us, runs.best_is_clean = 1 WHERE runs.owner_id IN (?)`,
		[ids]
	);
	await db.raw(
		`INSERT INTO sign_in_sessions (public_id, person_id, token_hash, expires_at) SELECT RANDOM_BYTES(16), id, RANDOM_BYTES(32), '2030-01-01' FROM people WHERE id IN (?)`,
		[ids]
	);
	await db.raw(
		`INSERT INTO jobs (kind, payload, status, finished_at) SELECT 'importRun', '{}', 'done', NOW() FROM uploads WHERE owner_id IN (?)`,
		[ids]
	);
	await db.raw(
		'INSERT INTO cars (public_id, owner_id, name) SELECT RANDOM_BYTES(16), id, name FROM people WHERE id IN (?)',
		[ids]
	);
	await db.raw(
		`INSERT INTO grants (public_id, owner_id, grantee_person_id, scope)
		SELECT RANDOM_BYTES(16), id, IF(id = ?, ?, id - 1), 'all' FROM people WHERE id IN (?)`,
		[Math.min(...ids), Math.max(...ids), ids]
	);
	await db.raw(
		`INSERT INTO shelf_references (public_id, person_id, layout_id, lap_id, name)
		SELECT RANDOM_BYTES(16), owner_id, layout_id, best_lap_id, 'a lap' FROM runs WHERE owner_id IN (?) AND best_lap_id IS NOT NULL`,
		[ids]
	);
	await db.raw(
		'INSERT INTO circuits (public_id, name, created_by) SELECT RANDOM_BYTES(16), name, id FROM people WHERE id IN (?)',
		[ids]
	);
	await db.raw(
		`INSERT INTO layouts (public_id, circuit_id, name, length_m) SELECT RANDOM_BYTES(16), id, name, 1000 + id * 7 FROM circuits WHERE created_by IN (?)`,
		[ids]
	);
	await db.raw(
		`INSERT INTO path_versions (layout_id, version, length_m, is_closed, origin, line, outline, codec, payload)
		SELECT layouts.id, 1, layouts.length_m, 1, 'positions', 'mark', '[]', 1, '' FROM layouts
		JOIN circuits ON circuits.id = layouts.circuit_id WHERE circuits.created_by IN (?)`,
		[ids]
	);
	await db.raw(
		`INSERT INTO corner_maps (layout_id, version, path_version, cells)
		SELECT layouts.id, 1, 1, '[]' FROM layouts JOIN circuits ON circuits.id = layouts.circuit_id WHERE circuits.created_by IN (?)`,
		[ids]
	);
	for (const table of GROWING) await db.raw('ANALYZE TABLE ??', [ALIASES[table] ?? table]);
}

beforeAll(async () => {
	driver = await makePerson();
	coach = await makePerson('Rhea Calloway');
	own = await storedRun(driver);
	await storedRun(driver, own);
	const coachRun = await storedRun(coach, own);
	await makeGrant(driver, { to: coach });
	await makeGrant(coach, { to: driver, scope: 'run', runId: coachRun.runId });
	await addMember(await makeOrganisation(), coach, 'coach');
	await crowd();
	const found = await Promise.all([driver, coach].map(({ id }) => findViewerOfPerson(db, id)));
	viewers = found.flatMap((viewer) => viewer ?? []);
}, 400_000);

afterAll(async () => {
	const crowdIds = db('people').where('name', 'like', 'Crowd %').select('id');
	await db('runs').whereIn('owner_id', crowdIds).delete();
	await db('layouts').where('name', 'like', 'Crowd %').delete();
	await db('circuits').where('name', 'like', 'Crowd %').delete();
	await db('people').where('name', 'like', 'Crowd %').delete();
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

interface Statement {
	sql: string;
	bindings: unknown[];
}

/** The statements that some work sends. */
async function statementsOf(work: () => Promise<unknown>): Promise<Statement[]> {
	const sent: Statement[] = [];
	const listen = ({ sql, bindings }: Statement) => sent.push({ sql, bindings });
	db.on('query', listen);
	try {
		await work();
	} finally {
		db.removeListener('query', listen);
	}
	return sent.filter(({ sql }) => /^\s*(select|update|delete)/i.test(sql));
}

interface PlanStep {
	table: string | null;
	type: string | null;
	key: string | null;
	rows: number | string | null;
	Extra: string | null;
}

async function faultsOf({ sql, bindings }: Statement): Promise<string[]> {
	const [steps]: PlanStep[][] = await db.raw(`EXPLAIN ${sql}`, bindings as never);
	return steps
		.filter(({ table }) => table !== null && GROWING.has(table))
		.filter(({ type }) => type !== null && !ONE_ROW.has(type))
		.filter(({ type, key, rows }) => type === 'ALL' || type === 'index' || key === null || Number(rows) > MOST_ROWS)
		.map((step) => `${JSON.stringify(step)} in ${sql.replaceAll(/\s+/g, ' ').slice(0, 900)}`);
}

const PAGES: { name: string; load: (viewer: Viewer) => Promise<unknown> }[] = [
	{ name: 'the notebook', load: (viewer) => loadNotebook(viewer) },
	{ name: "a driver's notebook", load: (viewer) => loadNotebook(viewer, driver.publicId) },
	{ name: 'the list of runs', load: (viewer) => loadRuns(viewer) },
	{
		name: 'the next page of runs',
		load: async (viewer) => loadRuns(viewer, { limit: 1, cursor: (await loadRuns(viewer, { limit: 1 })).nextCursor })
	},
	{ name: 'a run', load: (viewer) => loadRun(viewer, own.runPublicId) },
	{ name: 'a comparison', load: (viewer) => loadComparison(viewer, own.lapPublicIds[1], own.lapPublicIds[0]) },
	{
		name: 'a trace',
		load: async (viewer) => (await loadTrace(viewer, own.lapPublicIds[0], { encoding: 'packed' })).frame()
	},
	{ name: 'the uploads', load: (viewer) => loadUploads(viewer) },
	{
		name: 'the search for a known layout',
		load: (viewer) => findCandidates(db, viewer, { lengthM: 2200, centre: null, origin: 'positions' }, own.uploadId)
	}
];

describe('the queries of a page', () => {
	it.each(PAGES)('$name read by index, however many other people there are', async ({ load }) => {
		for (const viewer of viewers) {
			const statements = await statementsOf(() => load(viewer));
			expect(statements.length).toBeGreaterThan(0);
			const faults = (await Promise.all(statements.map(faultsOf))).flat();
			expect(faults).toEqual([]);
		}
	});

	it('an upload, for its owner', async () => {
		const statements = await statementsOf(() => loadUpload(viewers[0], own.uploadPublicId));
		expect((await Promise.all(statements.map(faultsOf))).flat()).toEqual([]);
	});

	it('who asks', async () => {
		const jar = await signedIn(driver);
		const statements = await statementsOf(() => testRequest('/api/v1/uploads', { jar }));
		expect((await Promise.all(statements.map(faultsOf))).flat()).toEqual([]);
	});

	it('the next job, beside thousands that are done', async () => {
		const statements = await statementsOf(async () => {
			await claim(db, 'a');
			await reap(db);
		});
		expect((await Promise.all(statements.map(faultsOf))).flat()).toEqual([]);
	});
});
