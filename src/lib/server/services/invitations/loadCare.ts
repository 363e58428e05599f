import type { Knex } from 'knex';
import type { PersonHead } from '../../../schemas/views.ts';
import { keptPeople } from '../../access/seenRuns.ts';
import type { Viewer } from '../../access/viewer.ts';
import { encodePublicId } from '../../db/publicId.ts';

/** Minors in the viewer's care. */
export async function loadCare(db: Knex, viewer: Viewer): Promise<PersonHead[]> {
	const kept = await keptPeople(db, viewer);
	const rows = await db('people')
		.whereIn('id', kept)
		.whereNot({ id: viewer.personId })
		.orderBy('name')
		.select<{ public_id: Buffer; name: string }[]>('public_id', 'name');
	return rows.map(({ public_id, name }) => ({ id: encodePublicId(public_id), name }));
}
