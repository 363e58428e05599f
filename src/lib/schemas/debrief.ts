import { z } from 'zod';
import { findingCodeSchema } from './codes.ts';
import { personHeadSchema, publicIdSchema } from './views.ts';
import { replySchema } from './zoneNote.ts';

const instant = z.iso.datetime();
/** Names a piece within one debrief, so that it can be moved, dropped and ticked. */
const keySchema = z.string().regex(/^[a-z0-9-]{1,40}$/, 'a key has small letters, digits and hyphens');
const words = (most: number) => z.string().max(most, `at most ${most} characters`);

/** Most that a page holds. */
const MOST_SECTIONS = 40;
const MOST_LINES = 12;

export const debriefLineSchema = z.object({
	key: keySchema,
	/** the finding that it was drafted from; null where the coach wrote it */
	code: findingCodeSchema.nullable(),
	text: words(1000)
});
export type DebriefLine = z.infer<typeof debriefLineSchema>;

export const debriefSectionSchema = z.object({
	key: keySchema,
	/** number of the corner that is drawn beside it; null for a section of words alone */
	corner: z.number().int().min(1).max(999).nullable(),
	title: words(120),
	/** measured facts, as drafted or rewritten */
	lines: z.array(debriefLineSchema).max(MOST_LINES),
	/** the coach's own words; set in their hand */
	words: words(4000)
});
export type DebriefSection = z.infer<typeof debriefSectionSchema>;

/** One thing to do next time; the driver ticks what they tried. */
export const debriefTaskSchema = z.object({
	key: keySchema,
	/** the focus that scores it; null where nothing does */
	focus: publicIdSchema.nullable(),
	title: words(200),
	where: words(120)
});
export type DebriefTask = z.infer<typeof debriefTaskSchema>;

/** What the coach writes: the whole of it travels at each save. */
export const debriefContentSchema = z
	.object({
		opening: words(4000),
		signature: words(80),
		sections: z.array(debriefSectionSchema).max(MOST_SECTIONS),
		tasks: z.array(debriefTaskSchema).max(12)
	})
	.superRefine(({ sections, tasks }, context) => {
		const keys = [
			...sections.flatMap(({ key, lines }) => [key, ...lines.map((line) => line.key)]),
			...tasks.map(({ key }) => key)
		];
		if (new Set(keys).size < keys.length)
			context.addIssue({ code: 'custom', path: ['sections'], message: 'each piece has a key of its own' });
	});
export type DebriefContent = z.infer<typeof debriefContentSchema>;

/** `POST /api/v1/debriefs`: what to draft from. */
export const debriefInputSchema = z.object({
	run: publicIdSchema,
	/** the driver's lap and the reference; without them the pair that the run's page proposes */
	lap: publicIdSchema.optional(),
	reference: publicIdSchema.optional()
});
export type DebriefInput = z.infer<typeof debriefInputSchema>;

/** `PUT /api/v1/debriefs/{id}`: the autosave. */
export const debriefSaveSchema = z.object({ revision: z.number().int().min(1), content: debriefContentSchema });
export type DebriefSave = z.infer<typeof debriefSaveSchema>;

/** `POST /api/v1/debriefs/{id}/send`: what the coach last saw. */
export const debriefSendSchema = z.object({ revision: z.number().int().min(1) });

/** `POST /api/v1/debriefs/{id}/links` */
export const linkInputSchema = z.object({ days: z.number().int().min(1).max(366) });
export const madeLinkSchema = z.object({ path: z.string() });

/** `PUT /api/v1/debriefs/{id}/ticks` */
export const tickInputSchema = z.object({ item: keySchema, ticked: z.boolean() });
export const savedSchema = z.object({ revision: z.number().int() });

const deltaWordSchema = z.enum(['lost', 'found', 'level']);
const penPairSchema = z.object({ driver: z.string(), reference: z.string() });

/** A corner as it is drawn beside a section: path data in tenths of a pixel, made from the laps at the time of sending. */
export const debriefDrawingSchema = z.object({
	plan: z.object({ widthPx: z.number(), heightPx: z.number(), reference: z.string(), driver: z.string() }).nullable(),
	traces: z.object({
		heightPx: z.number(),
		brake: penPairSchema.nullable(),
		floorPx: z.number(),
		speed: penPairSchema
	}),
	guides: z.array(z.object({ at: z.number(), apex: z.boolean() })),
	delta: z.object({
		heightPx: z.number(),
		domain: z.tuple([z.number(), z.number()]),
		fromM: z.number(),
		toM: z.number(),
		line: z.string(),
		lostClip: z.string().nullable(),
		foundClip: z.string().nullable(),
		end: z.object({ deltaS: z.number(), text: z.string(), word: deltaWordSchema })
	})
});
export type DebriefDrawing = z.infer<typeof debriefDrawingSchema>;

/** What was measured: everything that the page shows and the coach did not write. */
export const debriefFactsSchema = z.object({
	coach: z.string(),
	driver: z.string(),
	/** "Vallmere Park, grand prix · Brindle GT · 14 May, run 2" */
	where: z.string(),
	gapS: z.number(),
	/** "lap 6, 1:38.947" */
	lap: z.string(),
	/** "Rhea Calloway, 3 May, 1:37.663" */
	reference: z.string(),
	ledger: z.array(z.object({ corner: z.number().int(), totalS: z.number() })),
	plan: z
		.object({
			widthPx: z.number(),
			heightPx: z.number(),
			outline: z.string(),
			line: z.object({ path: z.string(), x: z.number(), y: z.number() }),
			figures: z.array(
				z.object({
					corner: z.number().int(),
					call: z.string(),
					x: z.number(),
					y: z.number(),
					sizePx: z.number(),
					word: deltaWordSchema,
					text: z.string()
				})
			)
		})
		.nullable(),
	/** of the corners that a section speaks of, by number */
	corners: z.array(
		z.object({
			number: z.number().int(),
			name: z.string(),
			totalS: z.number(),
			parts: z.array(z.object({ name: z.string(), text: z.string() })),
			drawing: debriefDrawingSchema
		})
	),
	/** to be said with the advice: a lock-up, fade, another car */
	cautions: z.array(z.string())
});
export type DebriefFacts = z.infer<typeof debriefFactsSchema>;

/** A debrief as it is read: what is drafted, and the frozen copy, look the same. */
export const debriefDocumentSchema = z.object({ content: debriefContentSchema, facts: debriefFactsSchema });
export type DebriefDocument = z.infer<typeof debriefDocumentSchema>;

export const debriefHeadSchema = z.object({
	id: publicIdSchema,
	author: personHeadSchema,
	driver: personHeadSchema,
	own: z.boolean(),
	run: publicIdSchema,
	where: z.string(),
	revision: z.number().int(),
	updatedAt: instant,
	sentAt: instant.nullable(),
	/** when the driver opened it first */
	readAt: instant.nullable(),
	replies: z.number().int()
});
export type DebriefHead = z.infer<typeof debriefHeadSchema>;

export const debriefLinkSchema = z.object({
	id: publicIdSchema,
	createdAt: instant,
	expiresAt: instant,
	openedAt: instant.nullable()
});
export type DebriefLink = z.infer<typeof debriefLinkSchema>;

export const debriefViewSchema = debriefHeadSchema.omit({ where: true, replies: true }).extend({
	document: debriefDocumentSchema,
	replies: z.array(replySchema),
	/** keys of tasks that the driver ticked */
	ticked: z.array(z.string()),
	/** links that hold, of the viewer's making */
	links: z.array(debriefLinkSchema),
	/** may the viewer write on it: the author, until it is sent */
	mayEdit: z.boolean(),
	/** is the viewer the driver, or their guardian */
	isDriver: z.boolean()
});
export type DebriefView = z.infer<typeof debriefViewSchema>;

export const debriefListSchema = z.object({ debriefs: z.array(debriefHeadSchema) });

export const phraseInputSchema = z.object({
	/** null: how a debrief opens */
	code: findingCodeSchema.nullable(),
	body: z.string().trim().min(1, 'write a few words').max(2000, 'a phrase has at most 2000 characters')
});
export const phraseSchema = z.object({ id: publicIdSchema, code: findingCodeSchema.nullable(), body: z.string() });
export type Phrase = z.infer<typeof phraseSchema>;
