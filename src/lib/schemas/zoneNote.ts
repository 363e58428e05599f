import { z } from 'zod';
import { targetSchema } from './target.ts';
import { personHeadSchema, publicIdSchema } from './views.ts';

const instant = z.iso.datetime();

/** Words with light formatting: see `format/richText.ts`. */
export const noteBodySchema = z.string().trim().max(4000, 'a note has at most 4000 characters');

/** A stretch of the layout's path, m from the line; it may run over the line, so that its end may lie before its start. */
const placeM = z.number().finite().min(0).max(100_000);

/** What a coach writes down. */
export const zoneNoteContentSchema = z.object({
	corner: publicIdSchema.nullable(),
	startM: placeM,
	endM: placeM,
	body: noteBodySchema,
	target: targetSchema.nullable()
});
export type ZoneNoteContent = z.infer<typeof zoneNoteContentSchema>;

const saysSomething = ({ body, target }: Pick<ZoneNoteContent, 'body' | 'target'>) => body !== '' || target !== null;
const SAY_SOMETHING = { message: 'write a few words, or ask for something', path: ['body'] };

/** `POST /api/v1/notes` */
export const zoneNoteInputSchema = zoneNoteContentSchema
	.extend({
		layout: publicIdSchema,
		/** for whom; null: for every driver who lets the author read their laps here */
		driver: publicIdSchema.nullable(),
		/** the run that it was written on */
		run: publicIdSchema.nullable().default(null)
	})
	.refine(saysSomething, SAY_SOMETHING);
export type ZoneNoteInput = z.infer<typeof zoneNoteInputSchema>;

/** `PATCH /api/v1/notes/{id}`: the whole of it, and the revision that it was changed from. */
export const zoneNoteChangeSchema = zoneNoteContentSchema
	.extend({ revision: z.number().int().min(1) })
	.refine(saysSomething, SAY_SOMETHING);
export type ZoneNoteChange = z.infer<typeof zoneNoteChangeSchema>;

export const replyInputSchema = z.object({
	body: z.string().trim().min(1, 'write a few words').max(2000, 'an answer has at most 2000 characters')
});

export const replySchema = z.object({ author: personHeadSchema, own: z.boolean(), body: z.string(), at: instant });
export type Reply = z.infer<typeof replySchema>;

export const zoneNoteViewSchema = zoneNoteContentSchema.extend({
	id: publicIdSchema,
	layout: publicIdSchema,
	author: personHeadSchema,
	driver: personHeadSchema.nullable(),
	/** of the path that its places are measured on */
	pathVersion: z.number().int(),
	cornerNumber: z.number().int().nullable(),
	cornerName: z.string().nullable(),
	revision: z.number().int(),
	createdAt: instant,
	updatedAt: instant,
	replies: z.array(replySchema),
	/** is it the viewer's to change */
	mayEdit: z.boolean(),
	mayReply: z.boolean()
});
export type ZoneNoteView = z.infer<typeof zoneNoteViewSchema>;

/** A note as it stood before a change. */
export const noteRevisionSchema = z.object({
	revision: z.number().int(),
	body: z.string(),
	startM: z.number(),
	endM: z.number(),
	target: targetSchema.nullable(),
	changedBy: z.string().nullable(),
	changedAt: instant
});
export type NoteRevision = z.infer<typeof noteRevisionSchema>;

/** `GET /api/v1/notes`: the query. */
export const notesQuerySchema = z.object({
	layout: publicIdSchema,
	corner: publicIdSchema.optional(),
	/** notes for this driver and for all */
	driver: publicIdSchema.optional()
});
export type NotesQuery = z.infer<typeof notesQuerySchema>;

export const zoneNoteListSchema = z.object({ notes: z.array(zoneNoteViewSchema) });
export const zoneNoteDetailSchema = zoneNoteViewSchema.extend({ history: z.array(noteRevisionSchema) });
export type ZoneNoteDetail = z.infer<typeof zoneNoteDetailSchema>;
