import type { Knex } from 'knex';
import { z } from 'zod';
import { columnMappingSchema, type ColumnMapping } from '../../schemas/columnMapping.ts';
import type { MappingInput } from '../../schemas/api.ts';
import type { Viewer } from '../access/viewer.ts';
import { RequestProblem } from '../http/problem.ts';

/** An answer about columns that is kept for files with one header. */
export interface RememberedMapping {
	id: number;
	scope: 'me' | 'organisation';
	mapping: ColumnMapping;
	/** may the viewer forget it: their own, and what they shared or, as coach or manager, anybody did */
	mayForget: boolean;
}

const rowSchema = z.object({
	id: z.number(),
	organisation_id: z.number().nullable(),
	created_by: z.number().nullable(),
	mapping: columnMappingSchema
});

/** The answer that holds for a person: their own before one of their organisations, of these the latest. */
export async function findRemembered(
	db: Knex,
	viewer: Pick<Viewer, 'personId' | 'memberships'>,
	headerKey: Buffer
): Promise<RememberedMapping | null> {
	const organisations = viewer.memberships.map(({ organisationId }) => organisationId);
	const found: unknown = await db('remembered_mappings')
		.where({ header_key: headerKey })
		.where((whose) => whose.where({ person_id: viewer.personId }).orWhereIn('organisation_id', organisations))
		.orderByRaw('person_id IS NULL, updated_at DESC')
		.first('id', 'organisation_id', 'created_by', 'mapping');
	if (!found) return null;
	const row = rowSchema.parse(found);
	const role = viewer.memberships.find(({ organisationId }) => organisationId === row.organisation_id)?.role;
	return {
		id: row.id,
		scope: row.organisation_id === null ? 'me' : 'organisation',
		mapping: row.mapping,
		mayForget:
			row.organisation_id === null || row.created_by === viewer.personId || role === 'coach' || role === 'manager'
	};
}

/** Has the person, or an organisation of theirs, any answer kept; saves a look at the file's header where not. */
export async function hasRemembered(db: Knex, viewer: Pick<Viewer, 'personId' | 'memberships'>): Promise<boolean> {
	const organisations = viewer.memberships.map(({ organisationId }) => organisationId);
	const found: unknown = await db('remembered_mappings')
		.where({ person_id: viewer.personId })
		.orWhereIn('organisation_id', organisations)
		.first('id');
	return found !== undefined;
}

/**
 * Keeps an answer for files with the header, in the place of an earlier one.
 *
 * @param ownerId whose files they are: the viewer, or a minor in their care
 * @throws {RequestProblem} `invalid_input` where it is not said with which organisation it is to be shared
 */
export async function remember(
	trx: Knex.Transaction,
	viewer: Viewer,
	ownerId: number,
	headerKey: Buffer,
	input: MappingInput
): Promise<void> {
	if (input.mapping === null || input.remember === undefined || input.remember === 'no') return;
	const shared = input.remember === 'organisation';
	await trx('remembered_mappings')
		.insert({
			person_id: shared ? null : ownerId,
			organisation_id: shared ? organisationOf(viewer, input.organisation) : null,
			header_key: headerKey,
			mapping: JSON.stringify(input.mapping),
			created_by: viewer.personId
		})
		.onConflict()
		.merge(['mapping', 'created_by']);
}

function organisationOf(viewer: Viewer, publicId: string | undefined): number {
	const { memberships } = viewer;
	const chosen =
		publicId === undefined && memberships.length === 1
			? memberships[0]
			: memberships.find(({ organisationPublicId }) => organisationPublicId === publicId);
	if (chosen) return chosen.organisationId;
	throw new RequestProblem(400, 'invalid_input', 'sharing an answer requires an organisation that you belong to', {
		issues: { organisation: ['choose one of your organisations'] }
	});
}

/** Organisations in which the viewer may share an answer, as pages name them. */
export function shareableWith(viewer: Viewer): { id: string; name: string }[] {
	return viewer.memberships.map(({ organisationPublicId, organisationName }) => ({
		id: organisationPublicId,
		name: organisationName
	}));
}
