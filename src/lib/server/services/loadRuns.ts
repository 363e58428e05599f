import { z } from 'zod';
import type { RunList } from '../../schemas/views.ts';
import { seenOwners } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listLayoutHeads } from '../db/layoutHeads.ts';
import { decodePublicId } from '../db/publicId.ts';
import { listFoundRuns, seenRunRows, toRunListItem, type FoundRun } from '../db/runRepository.ts';
import { notFound } from '../http/notFound.ts';

export interface RunsQuery {
	/** from the last answer */
	cursor?: string | null;
	/** 1–100 */
	limit?: number;
	/** only runs of this person */
	driver?: string | null;
	/** only runs on this layout */
	layout?: string | null;
}

const DEFAULT_LIMIT = 30;
const LARGEST_LIMIT = 100;

/**
 * Runs that the viewer may see, newest first, a page at a time. The cursor names the last run that was shown, so that a run
 * that comes in meanwhile moves nothing.
 */
export async function loadRuns(viewer: Viewer, query: RunsQuery = {}): Promise<RunList> {
	const db = database();
	const limit = Math.min(LARGEST_LIMIT, Math.max(1, query.limit ?? DEFAULT_LIMIT));
	const owners = await seenOwners(db, viewer);
	const rows = seenRunRows(db, viewer)
		.whereIn('runs.owner_id', owners)
		.orderBy([
			{ column: 'runs.sort_at', order: 'desc' },
			{ column: 'runs.id', order: 'desc' }
		])
		.limit(limit + 1);
	if (query.driver) rows.where('people.public_id', decodePublicId(query.driver) ?? notFound());
	if (query.layout) {
		const layout = decodePublicId(query.layout) ?? notFound();
		rows.where('runs.layout_id', db.select('id').from('layouts').where({ public_id: layout }));
	}
	const after = query.cursor ? decodeCursor(query.cursor) : null;
	if (after) rows.whereRaw('(runs.sort_at, runs.id) < (?, ?)', [after.sortAt, after.id]);
	const found = await listFoundRuns(rows);
	const shown = found.slice(0, limit);
	const layouts = await listLayoutHeads(
		db,
		viewer,
		shown.map(({ layout_id }) => layout_id)
	);
	return {
		runs: shown.flatMap((row) => {
			const layout = layouts.get(row.layout_id);
			return layout ? [toRunListItem(row, layout, viewer)] : [];
		}),
		nextCursor: found.length > limit ? encodeCursor(shown[shown.length - 1]) : null
	};
}

const cursorSchema = z.tuple([z.number().int(), z.number().int()]);

function encodeCursor({ sort_at, run_id }: FoundRun): string {
	return Buffer.from(JSON.stringify([sort_at.getTime(), run_id])).toString('base64url');
}

/** A cursor that was not ours begins at the front: it asks for nothing that the viewer could not have anyway. */
function decodeCursor(cursor: string): { sortAt: Date; id: number } | null {
	try {
		const [time, id] = cursorSchema.parse(JSON.parse(Buffer.from(cursor, 'base64url').toString()));
		return { sortAt: new Date(time), id };
	} catch {
		return null;
	}
}
