import { z } from 'zod';
import { cellSchema, cornerSchema } from './analysisDocument.ts';
import { publicIdSchema } from './views.ts';

/** What passes between the corner map's editor and the server: `GET` and `POST /api/v1/layouts/{id}/corner-map`. */

const placeSchema = z.number().min(0).max(100_000);
const nameSchema = z
	.string()
	.trim()
	.max(60, 'a name has at most 60 characters')
	.transform((text) => (text === '' ? null : text))
	.nullable();

/** One step of an edit. Corners are named by their id, which outlives every version; places are m from the line. */
export const cornerEditSchema = z.discriminatedUnion('kind', [
	/** two corners where one was; the part with the (first) apex keeps id and name */
	z.object({ kind: z.literal('split'), corner: publicIdSchema, atM: placeSchema }),
	/** one corner of two neighbours; it keeps id and name of the first, and takes in the kinks between */
	z.object({ kind: z.literal('merge'), first: publicIdSchema, second: publicIdSchema }),
	/** what is absent stays where it is */
	z.object({
		kind: z.literal('move'),
		corner: publicIdSchema,
		startM: placeSchema.optional(),
		apexM: placeSchema.optional(),
		/** null takes a second apex away */
		apex2M: placeSchema.nullable().optional(),
		endM: placeSchema.optional()
	}),
	z.object({ kind: z.literal('name'), corner: publicIdSchema, name: nameSchema }),
	/** a kink becomes a corner */
	z.object({ kind: z.literal('number'), corner: publicIdSchema }),
	/** a corner becomes a kink: listed, and no longer measured */
	z.object({ kind: z.literal('unnumber'), corner: publicIdSchema })
]);
export type CornerEdit = z.infer<typeof cornerEditSchema>;

export const cornerMapChangeSchema = z.union([
	z.object({
		/** version that the editor showed; another one in between is a conflict */
		basedOn: z.number().int().min(1),
		edits: z.array(cornerEditSchema).min(1).max(100),
		/** true: nothing is stored, the answer says what would change */
		preview: z.boolean().default(false)
	}),
	z.object({
		basedOn: z.number().int().min(1),
		/** undo: an earlier version counts again, as a new one with the same corners */
		restore: z.number().int().min(1),
		preview: z.boolean().default(false)
	})
]);
export type CornerMapChange = z.infer<typeof cornerMapChangeSchema>;

/** A corner or kink of a map; kinks have an id too. */
export const mapCornerSchema = cornerSchema.extend({ id: publicIdSchema, name: z.string().nullable() });
export type MapCorner = z.infer<typeof mapCornerSchema>;

export const cornerChangeSchema = z.object({
	id: publicIdSchema,
	/** null where it was not, or is no longer there */
	before: mapCornerSchema.nullable(),
	after: mapCornerSchema.nullable(),
	/** its places moved, or those of a neighbour that bounds where its braking is looked for */
	remeasured: z.boolean()
});
export type CornerChange = z.infer<typeof cornerChangeSchema>;

export const cornerMapViewSchema = z.object({
	version: z.number().int(),
	corners: z.array(mapCornerSchema),
	cells: z.array(cellSchema),
	/** newest first */
	versions: z.array(
		z.object({ version: z.number().int(), createdAt: z.iso.datetime(), createdBy: z.string().nullable() })
	),
	/** version that is being cut; null where none is */
	pending: z.number().int().nullable()
});
export type CornerMapView = z.infer<typeof cornerMapViewSchema>;

export const cornerMapAnswerSchema = z.object({
	/** version that will count once all stored laps are cut; null for a preview, or where only names changed */
	version: z.number().int().nullable(),
	corners: z.array(mapCornerSchema),
	cells: z.array(cellSchema),
	changes: z.array(cornerChangeSchema),
	/** borders of cells moved, so that theoretical bests and consistency are counted anew */
	cellsChanged: z.boolean(),
	/** stored laps and runs that are cut again */
	laps: z.number().int(),
	runs: z.number().int()
});
export type CornerMapAnswer = z.infer<typeof cornerMapAnswerSchema>;
