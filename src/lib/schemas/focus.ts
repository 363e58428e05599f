import { z } from 'zod';
import { lapScoreSchema, runScoreSchema, targetSchema } from './target.ts';
import { carHeadSchema, layoutHeadSchema, personHeadSchema, publicIdSchema } from './views.ts';

const instant = z.iso.datetime();
const nullable = z.number().nullable();

/** `POST /api/v1/focus`: a target of its own, or that of a note. */
export const focusInputSchema = z
	.object({
		driver: publicIdSchema,
		layout: publicIdSchema,
		/** only laps in this car are scored; null: only those whose car nobody said */
		car: publicIdSchema.nullable(),
		corner: publicIdSchema.nullable(),
		note: publicIdSchema.nullable().default(null),
		/** null: the note's */
		target: targetSchema.nullable()
	})
	.superRefine(({ corner, note, target }, context) => {
		if (target === null && note === null)
			context.addIssue({ code: 'custom', path: ['target'], message: 'say what is asked, or name a note that does' });
		if (target !== null && corner === null && target.kind !== 'lap_time' && target.kind !== 'free')
			context.addIssue({ code: 'custom', path: ['corner'], message: 'say in which corner' });
	});
export type FocusInput = z.infer<typeof focusInputSchema>;

export const focusStateSchema = z.enum(['open', 'met', 'dropped']);
export type FocusState = z.infer<typeof focusStateSchema>;

/** `PATCH /api/v1/focus/{id}` */
export const focusChangeSchema = z.object({ state: focusStateSchema });

/** One later run, scored. */
export const focusRunSchema = runScoreSchema.extend({
	run: publicIdSchema,
	startedAt: instant.nullable(),
	/** when it was driven, or handed over where nobody knows */
	at: instant,
	runOfDay: z.number().int(),
	laps: z.array(lapScoreSchema),
	/** median of the corner over clean laps */
	cornerS: nullable
});
export type FocusRun = z.infer<typeof focusRunSchema>;

export const focusPointSchema = z.object({
	id: publicIdSchema,
	driver: personHeadSchema,
	setBy: personHeadSchema.nullable(),
	layout: layoutHeadSchema.omit({ outline: true }),
	car: carHeadSchema.nullable(),
	corner: z.object({ id: publicIdSchema, number: z.number().int().nullable(), name: z.string().nullable() }).nullable(),
	note: z.object({ id: publicIdSchema, body: z.string(), startM: z.number(), endM: z.number() }).nullable(),
	target: targetSchema,
	state: focusStateSchema,
	setAt: instant,
	closedAt: instant.nullable(),
	/** runs since it was set, oldest first */
	runs: z.array(focusRunSchema),
	met: z.number().int(),
	scored: z.number().int(),
	/** share of scored laps that met it, last scored run against the one before; null with fewer than two */
	trend: z.enum(['up', 'level', 'down']).nullable(),
	/** s by which the corner's median of the last run is less than before the focus was set; null where either is not known */
	foundS: nullable,
	/** corner time of laps that met it minus that of laps that did not, over all runs, with its 95 % interval */
	paidS: z.object({ differenceS: z.number(), low: z.number(), high: z.number() }).nullable(),
	metButSlower: z.number().int(),
	/** it held in the last scored run: worth closing, which people decide */
	proposed: z.boolean(),
	mayChange: z.boolean()
});
export type FocusPoint = z.infer<typeof focusPointSchema>;

export const focusListSchema = z.object({
	driver: personHeadSchema,
	own: z.boolean(),
	points: z.array(focusPointSchema),
	/** more are open than a driver can keep in mind */
	tooMany: z.boolean(),
	/** others whose focus the viewer may read */
	others: z.array(personHeadSchema)
});
export type FocusList = z.infer<typeof focusListSchema>;

/** `GET /api/v1/focus`: the query. */
export const focusQuerySchema = z.object({ driver: publicIdSchema.optional() });
