import { z } from 'zod';
import type { LapGrid, ReferencePath } from '../analysis/model.ts';
import {
	cellSchema,
	comparisonSchema,
	cornerSchema,
	errorDocumentSchema,
	lapKindSchema,
	metricsSchema,
	sourceSchema,
	warningSchema,
	type Comparison
} from './analysisDocument.ts';
import { lapReasonSchema } from './codes.ts';
import { columnMappingSchema } from './columnMapping.ts';

/**
 * What the services hand to pages and to the API. Names are the field's, units stand in the names, times are seconds, instants
 * are ISO 8601 in UTC, ids are the public ones that URLs carry. Nothing here was not permitted to the viewer who asked.
 */

/** 26 characters of Crockford's base 32, lower case: the 128 random bits by which a row is known outside. */
export const publicIdSchema = z.string().regex(/^[0-9a-hjkmnp-tv-z]{26}$/, 'an id has 26 characters');
export type PublicId = z.infer<typeof publicIdSchema>;

const instant = z.iso.datetime();
const nullable = z.number().nullable();

export const roleSchema = z.enum(['driver', 'coach', 'manager', 'admin']);
export type Role = z.infer<typeof roleSchema>;

export const preferencesSchema = z.object({
	speedUnit: z.enum(['kmh', 'mph']),
	lengthUnit: z.enum(['m', 'ft']),
	pressureUnit: z.enum(['bar', 'psi']),
	theme: z.enum(['system', 'light', 'dark'])
});
export type Preferences = z.infer<typeof preferencesSchema>;

/** The signed-in person as pages know them; what they may do is decided on the server alone. */
export const viewerHeadSchema = z.object({
	id: publicIdSchema,
	name: z.string(),
	email: z.string(),
	isOperator: z.boolean(),
	organisations: z.array(z.object({ id: publicIdSchema, name: z.string(), role: roleSchema })),
	/** is the person a coach or manager anywhere, or does somebody share laps with them */
	readsOthers: z.boolean(),
	preferences: preferencesSchema
});
export type ViewerHead = z.infer<typeof viewerHeadSchema>;

export const personHeadSchema = z.object({ id: publicIdSchema, name: z.string() });
export type PersonHead = z.infer<typeof personHeadSchema>;

export const circuitHeadSchema = z.object({ id: publicIdSchema, name: z.string() });
export type CircuitHead = z.infer<typeof circuitHeadSchema>;

export const layoutHeadSchema = z.object({
	id: publicIdSchema,
	name: z.string(),
	circuit: circuitHeadSchema,
	lengthM: z.number(),
	/** numbered corners of the current corner map */
	cornerCount: z.number().int(),
	/** the path in at most 120 points, local metres, x east, y north; closed where the layout is; empty without a shape */
	outline: z.array(z.tuple([z.number(), z.number()])),
	/** may the viewer rename it and its corners */
	mayEdit: z.boolean()
});
export type LayoutHead = z.infer<typeof layoutHeadSchema>;

export const carHeadSchema = z.object({ id: publicIdSchema, name: z.string() });
export type CarHead = z.infer<typeof carHeadSchema>;

export const placeSchema = z.enum(['simulator', 'real', 'unknown']);
export type Place = z.infer<typeof placeSchema>;
export const conditionsSchema = z.enum(['dry', 'damp', 'wet', 'unknown']);
export type Conditions = z.infer<typeof conditionsSchema>;
export const intentSchema = z.enum(['pace', 'learning', 'fuel', 'tyres', 'unknown']);
export type Intent = z.infer<typeof intentSchema>;

/** A corner of the layout's map: measured places, and what people call it. */
export const cornerViewSchema = cornerSchema.extend({
	/** stays the same across versions of the corner map; null for kinks */
	id: publicIdSchema.nullable(),
	name: z.string().nullable()
});
export type CornerView = z.infer<typeof cornerViewSchema>;

/** One lap with what must stand beside its time wherever it is named. */
export const lapHeadSchema = z.object({
	id: publicIdSchema,
	runId: publicIdSchema,
	number: z.number().int(),
	kind: lapKindSchema,
	timeS: z.number(),
	clean: z.boolean(),
	reasons: z.array(lapReasonSchema),
	plusMinusS: z.number(),
	driver: personHeadSchema,
	/** is it the viewer's own lap */
	own: z.boolean(),
	car: carHeadSchema.nullable(),
	place: placeSchema,
	conditions: conditionsSchema,
	/** when the run began; null where neither the file nor a person says so */
	startedAt: instant.nullable(),
	/** name on the shelf of references, where it stands there */
	shelfName: z.string().nullable()
});
export type LapHead = z.infer<typeof lapHeadSchema>;

/** A lap among its run's laps. */
export const lapRowSchema = z.object({
	id: publicIdSchema,
	number: z.number().int(),
	kind: lapKindSchema,
	/** s from the run's first sample */
	startS: z.number(),
	timeS: z.number(),
	lengthM: nullable,
	clean: z.boolean(),
	reasons: z.array(lapReasonSchema),
	plusMinusS: z.number(),
	/** time in each cell; null where the lap has no complete pass of it */
	cellS: z.array(nullable)
});
export type LapRow = z.infer<typeof lapRowSchema>;

export const runListItemSchema = z.object({
	id: publicIdSchema,
	driver: personHeadSchema,
	own: z.boolean(),
	layout: layoutHeadSchema.omit({ outline: true }),
	car: carHeadSchema.nullable(),
	place: placeSchema,
	conditions: conditionsSchema,
	startedAt: instant.nullable(),
	uploadedAt: instant,
	/** first, second … run of this driver on its day, to name it: "14 May, run 2" */
	runOfDay: z.number().int(),
	timedLaps: z.number().int(),
	cleanLaps: z.number().int(),
	/** best clean lap, else the fastest timed one, else null */
	bestLap: z.object({ id: publicIdSchema, timeS: z.number(), clean: z.boolean() }).nullable(),
	theoreticalBestS: nullable
});
export type RunListItem = z.infer<typeof runListItemSchema>;

export const runListSchema = z.object({ runs: z.array(runListItemSchema), nextCursor: z.string().nullable() });
export type RunList = z.infer<typeof runListSchema>;

/** Spread of one corner over the clean laps of a run. */
export const cornerSpreadSchema = z.object({
	corner: z.number().int(),
	laps: z.number().int(),
	bestS: nullable,
	medianS: nullable,
	/** standard deviation over the clean laps; null under three laps */
	sdS: nullable,
	bestLapId: publicIdSchema.nullable(),
	minKmhBest: nullable,
	minKmhMedian: nullable
});
export type CornerSpread = z.infer<typeof cornerSpreadSchema>;

/** What to lay on what: the lap and the reference that the product proposes. */
export const pairSuggestionSchema = z.object({
	lap: lapHeadSchema,
	reference: lapHeadSchema,
	why: z.enum(['coach_shelf', 'shared_best', 'own_best', 'own_earlier', 'own_second'])
});
export type PairSuggestion = z.infer<typeof pairSuggestionSchema>;

export const runViewSchema = runListItemSchema.extend({
	layout: layoutHeadSchema,
	intent: intentSchema,
	tyreSet: z.string().nullable(),
	fuelKg: nullable,
	/** the file it came from; null when the viewer may not see uploads of its owner */
	upload: z.object({ id: publicIdSchema, fileName: z.string() }).nullable(),
	sampleRateHz: z.number(),
	pathOrigin: z.enum(['positions', 'latAcc', 'yawRate', 'steering', 'speedOnly']),
	/** channels that the run carries on the grid, for what can be said and what not */
	channels: z.array(z.string()),
	warnings: z.array(warningSchema),
	laps: z.array(lapRowSchema),
	corners: z.array(cornerViewSchema),
	cells: z.array(cellSchema),
	spread: z.array(cornerSpreadSchema),
	suggestion: pairSuggestionSchema.nullable(),
	/** laps on the same layout that the viewer may lay these on, best candidates first */
	references: z.array(lapHeadSchema),
	mayEdit: z.boolean()
});
export type RunView = z.infer<typeof runViewSchema>;

export const uploadStateSchema = z.enum(['receiving', 'stored', 'reading', 'needs_answer', 'analysed', 'refused']);
export type UploadState = z.infer<typeof uploadStateSchema>;

export const uploadStageSchema = z.enum(['waiting', 'reading', 'laps', 'corners', 'storing', 'done']);
export type UploadStage = z.infer<typeof uploadStageSchema>;

export const uploadHeadSchema = z.object({
	id: publicIdSchema,
	fileName: z.string(),
	/** a zip becomes an upload of each file in it, and holds no run itself */
	kind: z.enum(['file', 'archive']),
	/** the archive that it came out of */
	archive: z.object({ id: publicIdSchema, fileName: z.string() }).nullable(),
	sizeBytes: z.number().int(),
	/** bytes that are here; while it is received fewer than `sizeBytes` */
	receivedBytes: z.number().int(),
	state: uploadStateSchema,
	stage: uploadStageSchema,
	/** 0–1 within the whole import */
	progress: z.number(),
	/** rows of the file that were read so far; null before the first */
	rowsRead: z.number().int().nullable(),
	createdAt: instant,
	/** why it was refused, in the words of the core; in the state `needs_answer`, what has to be answered */
	error: errorDocumentSchema.shape.error.nullable(),
	runIds: z.array(publicIdSchema)
});
export type UploadHead = z.infer<typeof uploadHeadSchema>;

export const uploadRunSchema = z.object({
	id: publicIdSchema,
	layout: layoutHeadSchema,
	/** was the layout known before this file */
	layoutKnown: z.boolean(),
	car: carHeadSchema.nullable(),
	startedAt: instant.nullable(),
	laps: z.array(lapRowSchema),
	bestLapId: publicIdSchema.nullable(),
	theoreticalBestS: nullable,
	warnings: z.array(warningSchema),
	/** speed over time in at most 600 columns: lowest and highest value of each, for "the run as we read it" */
	speedStrip: z.object({
		durationS: z.number(),
		lowKmh: z.array(nullable),
		highKmh: z.array(nullable)
	})
});
export type UploadRun = z.infer<typeof uploadRunSchema>;

/** One file of an archive. */
export const archiveFileSchema = z.object({
	name: z.string(),
	/** the upload that it became; null for what is no table of text, and for what was deleted since */
	upload: z.object({ id: publicIdSchema, state: uploadStateSchema }).nullable(),
	/** was the same file here before, so that it was not taken twice */
	knownBefore: z.boolean()
});
export type ArchiveFile = z.infer<typeof archiveFileSchema>;

/** For whom an answer about columns is kept, for files with the same header. */
export const rememberSchema = z.enum(['me', 'organisation', 'no']);
export type Remember = z.infer<typeof rememberSchema>;

export const uploadViewSchema = uploadHeadSchema.extend({
	sha256: z.string().nullable(),
	/** what a person said of the columns, for this file or by an answer that is remembered */
	mapping: columnMappingSchema.nullable(),
	/** the remembered answer for files with this header that is the viewer's to use; null where there is none */
	remembered: z
		.object({
			scope: z.enum(['me', 'organisation']),
			/** was this file read by it */
			used: z.boolean(),
			/** may the viewer forget it */
			mayForget: z.boolean()
		})
		.nullable(),
	/** organisations in which the viewer may share an answer */
	shareableWith: z.array(z.object({ id: publicIdSchema, name: z.string() })),
	/** what an archive holds, in its order; empty for a file */
	files: z.array(archiveFileSchema),
	/** what was understood of the file; null until it was read */
	understood: sourceSchema.nullable(),
	/** channels that the file has no column for, and what is used in their place, if anything */
	absent: z.array(z.object({ channel: z.string(), instead: z.string().nullable() })),
	runs: z.array(uploadRunSchema)
});
export type UploadView = z.infer<typeof uploadViewSchema>;

/** One page of a driver's notebook: a layout in a car. */
export const notebookPageSchema = z.object({
	layout: layoutHeadSchema,
	car: carHeadSchema.nullable(),
	runs: z.number().int(),
	lastRunAt: instant.nullable(),
	lastRunId: publicIdSchema,
	bestLap: z.object({ id: publicIdSchema, runId: publicIdSchema, timeS: z.number() }).nullable(),
	theoreticalBestS: nullable,
	/** time of each cell's best clean pass per run, oldest run first: progress by corner */
	progress: z.array(
		z.object({
			corners: z.array(z.number().int()),
			names: z.array(z.string().nullable()),
			points: z.array(
				z.object({ runId: publicIdSchema, startedAt: instant.nullable(), bestS: nullable, medianS: nullable })
			),
			referenceS: nullable
		})
	),
	suggestion: pairSuggestionSchema.nullable()
});
export type NotebookPage = z.infer<typeof notebookPageSchema>;

export const notebookViewSchema = z.object({
	driver: personHeadSchema,
	own: z.boolean(),
	pages: z.array(notebookPageSchema),
	latestRuns: z.array(runListItemSchema),
	totalRuns: z.number().int(),
	/** uploads that are not finished, or were refused in the last week */
	openUploads: z.array(uploadHeadSchema),
	/** people whose notebooks the viewer may read too */
	others: z.array(personHeadSchema)
});
export type NotebookView = z.infer<typeof notebookViewSchema>;

/**
 * Two laps laid on each other, for the server's own use: `load` turns it into path strings and summaries, the API into JSON and
 * binary columns. Grids and the path are typed arrays.
 */
export interface ComparisonView {
	driver: LapHead;
	reference: LapHead;
	layout: LayoutHead;
	path: ReferencePath;
	corners: CornerView[];
	cells: z.infer<typeof cellSchema>[];
	comparison: Comparison;
	driverMetrics: z.infer<typeof metricsSchema>[];
	referenceMetrics: z.infer<typeof metricsSchema>[];
	/** metrics of every timed lap of the driver's run, for habit dots and faint further laps */
	runMetrics: z.infer<typeof metricsSchema>[];
	driverGrid: LapGrid;
	referenceGrid: LapGrid;
	/** what each lap's own brake column was multiplied by, so that both stand on one scale; 1 where nothing was guessed */
	brakeScale: { driver: number; reference: number };
	/** the driver's run, for switching the lap in place */
	runLaps: LapHead[];
	/** laps that may stand as reference here, best candidates first */
	otherReferences: LapHead[];
	/** what a reader must know before trusting the pair */
	fairness: z.infer<typeof fairnessSchema>[];
	warnings: z.infer<typeof warningSchema>[];
	/** sha-256 of everything the answer depends on, hex: the ETag */
	contentHash: string;
}
export const fairnessSchema = z.enum([
	'other_car',
	'car_unknown',
	'other_conditions',
	'conditions_unknown',
	'other_place',
	'driver_lap_not_clean',
	'reference_not_clean'
]);
export type Fairness = z.infer<typeof fairnessSchema>;

/** The JSON of `GET /api/v1/compare/{lap}/{reference}`. */
export const comparisonDocumentSchema = z.object({
	driver: lapHeadSchema,
	reference: lapHeadSchema,
	layout: layoutHeadSchema,
	corners: z.array(cornerViewSchema),
	cells: z.array(cellSchema),
	driverMetrics: z.array(metricsSchema),
	comparison: comparisonSchema,
	fairness: z.array(fairnessSchema),
	warnings: z.array(warningSchema)
});
export type ComparisonDocument = z.infer<typeof comparisonDocumentSchema>;
