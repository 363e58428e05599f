import { z } from 'zod';
import { channelSchema } from './channels.ts';
import { errorCodeSchema, findingCodeSchema, lapReasonSchema, metricReasonSchema, warningCodeSchema } from './codes.ts';
import { importQuestionSchema } from './importQuestion.ts';

/** The JSON document of `analyse`, "kerbnote.analysis/1". Field names are fixed: add, never rename. */

const nullable = z.number().nullable();

export const warningSchema = z.object({
	code: warningCodeSchema,
	message: z.string(),
	/** 1-based line of the file, where there is one */
	row: z.number().int().nullable()
});
export type Warning = z.infer<typeof warningSchema>;

export const sourceColumnSchema = z.object({
	header: z.string(),
	channel: channelSchema.nullable(),
	/** the unit in the file, as understood: "km/h", "mph", "0..1", "raw counts", "switch", "" for none */
	unit: z.string(),
	/** 0–1: how sure the recognition is */
	confidence: z.number(),
	min: nullable,
	max: nullable,
	samples: z.array(z.string()),
	/** true where a person said that its values count the other way */
	turned: z.boolean().optional()
});
export type SourceColumn = z.infer<typeof sourceColumnSchema>;

export const sourceSchema = z.object({
	rows: z.number().int(),
	sampleRateHz: z.number(),
	columns: z.array(sourceColumnSchema),
	warnings: z.array(warningSchema),
	encoding: z.string(),
	delimiter: z.string(),
	decimal: z.enum(['.', ',']),
	headerRow: z.number().int().nullable(),
	metadata: z.record(z.string(), z.string())
});
export type SourceSummary = z.infer<typeof sourceSchema>;

export const pathOriginSchema = z.enum(['positions', 'latAcc', 'yawRate', 'steering', 'speedOnly']);
export type PathOrigin = z.infer<typeof pathOriginSchema>;
export const pathSchema = z.object({
	lengthM: z.number(),
	stepM: z.literal(1),
	xM: z.array(z.number()),
	yM: z.array(z.number()),
	origin: pathOriginSchema,
	line: z.enum(['mark', 'layout', 'chosen'])
});

export const lapKindSchema = z.enum(['out', 'timed', 'in', 'partial']);
export type LapKind = z.infer<typeof lapKindSchema>;
export const lapSchema = z.object({
	number: z.number().int(),
	kind: lapKindSchema,
	startS: z.number(),
	timeS: z.number(),
	lengthM: nullable,
	clean: z.boolean(),
	reasons: z.array(lapReasonSchema),
	/** time in each cell, null where the lap has no complete pass of it */
	cellS: z.array(nullable),
	/** ± of timeS where sampling limits it (lap column alone), else 0 */
	plusMinusS: z.number()
});
export type LapDocument = z.infer<typeof lapSchema>;

export const directionSchema = z.enum(['left', 'right']);
export const cornerSchema = z.object({
	number: z.number().int().nullable(),
	startM: z.number(),
	apexM: z.number(),
	/** second place of a double apex */
	apex2M: nullable,
	endM: z.number(),
	direction: directionSchema.nullable(),
	minRadiusM: nullable,
	angleDeg: nullable,
	/** number of the corner that this one is linked to (the next one), if any */
	linkedTo: z.number().int().nullable(),
	kind: z.enum(['braked', 'lifted', 'flat']).nullable()
});
export type Corner = z.infer<typeof cornerSchema>;

export const cellSchema = z.object({ corners: z.array(z.number().int()), startM: z.number(), endM: z.number() });
export type Cell = z.infer<typeof cellSchema>;

export const metricsSchema = z.object({
	lap: z.number().int(),
	corner: z.number().int(),
	onsetM: nullable,
	onsetS: nullable,
	peakPct: nullable,
	/** the raw maximum beside the held level */
	peakRawPct: nullable,
	peakM: nullable,
	riseS: nullable,
	releaseStartM: nullable,
	releaseEndM: nullable,
	releaseS: nullable,
	/** slope only falls */
	releaseProgressive: z.boolean().nullable(),
	/** further applications within the corner's braking: pulses and second dabs */
	dabs: z.number().int().nullable(),
	lightHoldS: nullable,
	trailS: nullable,
	trailM: nullable,
	turnInM: nullable,
	entryKmh: nullable,
	minKmh: nullable,
	minSpeedM: nullable,
	liftM: nullable,
	/** lifted corner: the smallest throttle opening, and where */
	smallestOpeningPct: nullable,
	smallestOpeningM: nullable,
	pickUpM: nullable,
	fullThrottleM: nullable,
	secondLiftS: nullable,
	overlapS: nullable,
	coastingS: nullable,
	exitKmh: nullable,
	idleGapS: nullable,
	lockUps: z.number().int().nullable(),
	timeS: nullable,
	/** coasting's three shares: before the brake, between brakings, after the brake; absent in older analyses */
	coastBeforeS: nullable.optional(),
	coastBetweenS: nullable.optional(),
	coastAfterS: nullable.optional(),
	/** level of the longest level stretch of 2–25 % after the peak while the car turns */
	holdPct: nullable.optional(),
	/** mean deceleration while the brake is above 80 % of its peak */
	brakedMps2: nullable.optional(),
	/** time with a driven wheel turning over 10 % faster than the ground, on the throttle, from the apex on */
	spinS: nullable.optional(),
	/** back-and-forth movements of the steering from turn-in to the corner's end */
	steerCorrections: z.number().int().nullable().optional(),
	/** lock-ups of a rear wheel that begin at a downshift */
	rearLocks: z.number().int().nullable().optional(),
	/** wheels that locked, as "fl fr"; null for none */
	lockWheels: z.string().nullable().optional(),
	/** ± by field, where sampling or noise limits it */
	plusMinus: z.record(z.string(), z.number()),
	reasons: z.record(z.string(), metricReasonSchema)
});
export type CornerMetrics = z.infer<typeof metricsSchema>;

export const wheelSchema = z.enum(['fl', 'fr', 'rl', 'rr']);
export type Wheel = z.infer<typeof wheelSchema>;
export const lockUpSchema = z.object({
	wheel: wheelSchema,
	startS: z.number(),
	endS: z.number(),
	lowestSlip: z.number(),
	lap: z.number().int().nullable(),
	corner: z.number().int().nullable(),
	/** a rear wheel that locks at a downshift; null where gears are not known */
	atDownshift: z.boolean().nullable().optional()
});
export type LockUp = z.infer<typeof lockUpSchema>;

export const evidenceSchema = z.object({
	quantity: z.string(),
	unit: z.string(),
	driver: nullable,
	reference: nullable,
	atM: nullable,
	plusMinus: nullable
});
export type Evidence = z.infer<typeof evidenceSchema>;
export const findingSchema = z.object({
	corner: z.number().int(),
	code: findingCodeSchema,
	costS: nullable,
	plusMinusS: nullable,
	/** null: fewer than five clean laps, so it is not said */
	habit: z.boolean().nullable(),
	/** laps that show it, of how many clean ones */
	habitLaps: z.object({ shown: z.number().int(), of: z.number().int() }).nullable(),
	/**
	 * where the cost falls, by ledger row: the shares sum to costS, and a share in a later row is what is carried on.
	 * `carried_in` of a corner repeats such shares, so that it is left out of sums (corner 0 is a cost of its own: it
	 * comes from the lap before).
	 */
	shares: z.array(z.object({ corner: z.number().int(), costS: z.number() })),
	evidence: z.array(evidenceSchema),
	text: z.string(),
	/** the exercise that goes with it where nothing is known of the circumstances, so as for a real car; null where none may be said */
	drill: z.string().nullable().optional(),
	/** "you have already done this": the driver's own clean lap without it that was quickest in the corner; null for none */
	ownLap: z.number().int().nullable().optional()
});
export type Finding = z.infer<typeof findingSchema>;

export const ledgerRowSchema = z.object({
	/** 0 is the run-up from the line to the first entry */
	corner: z.number().int(),
	entryS: z.number(),
	midS: z.number(),
	exitS: z.number(),
	/** part of exitS that lies beyond the corner's end */
	straightS: z.number(),
	totalS: z.number(),
	/** borders in m on the path: where entry, mid, exit begin and where the row ends */
	entryM: z.number(),
	midM: z.number(),
	exitM: z.number(),
	endM: z.number()
});
export type LedgerRow = z.infer<typeof ledgerRowSchema>;

/** linked corners judged as one: what the corners before the last one's exit found or lost, and what came out of it */
export const chainSchema = z.object({
	corners: z.array(z.number().int()),
	beforeS: z.number(),
	exitS: z.number()
});

export const fadeSchema = z.object({
	/** change of deceleration at equal brake and equal speed, from begin to end of the run, as a share */
	changeShare: z.number(),
	/** two standard errors */
	plusMinus: z.number(),
	readings: z.number().int(),
	sign: z.boolean()
});

export const rollingLapSchema = z.object({ timeS: z.number(), startM: z.number(), lap: z.number().int() });

export const ownBestSchema = z.object({
	corners: z.array(z.number().int()),
	bestS: z.number(),
	lap: z.number().int(),
	medianS: z.number(),
	laps: z.number().int()
});

export const cornerSpreadSchema = z.object({
	corner: z.number().int(),
	onsetSdM: nullable,
	minSpeedSdKmh: nullable,
	timeSdS: nullable,
	laps: z.number().int()
});

export const comparisonSchema = z.object({
	lap: z.number().int(),
	referenceLap: z.number().int(),
	deltaS: z.number(),
	stepM: z.literal(1),
	/** Δ at i · stepM, from the line to the line */
	delta: z.array(z.number()),
	referenceMetrics: z.array(metricsSchema),
	ledger: z.array(ledgerRowSchema),
	findings: z.array(findingSchema),
	/** per ledger row, what no finding explains: the row's total is the sum of the shares in it plus this */
	unexplained: z.array(z.object({ corner: z.number().int(), costS: z.number() })),
	chains: z.array(chainSchema).optional()
});
export type Comparison = z.infer<typeof comparisonSchema>;

export const analysisDocumentSchema = z.object({
	schema: z.literal('kerbnote.analysis/1'),
	source: sourceSchema,
	path: pathSchema,
	laps: z.array(lapSchema),
	corners: z.array(cornerSchema),
	cells: z.array(cellSchema),
	metrics: z.array(metricsSchema),
	lockUps: z.array(lockUpSchema),
	theoreticalBestS: nullable,
	/** least time over one full length from any place; null without clean laps or on an open path */
	rollingBest: rollingLapSchema.nullable().optional(),
	/** null where the run is too short, or has no brake level */
	fade: fadeSchema.nullable().optional(),
	/** own best beside own median, by cell */
	ownBest: z.array(ownBestSchema).optional(),
	/** from clean lap to clean lap, by corner */
	spreads: z.array(cornerSpreadSchema).optional(),
	comparison: comparisonSchema.nullable()
});
export type AnalysisDocument = z.infer<typeof analysisDocumentSchema>;

export const errorDocumentSchema = z.object({
	error: z.object({
		code: errorCodeSchema,
		message: z.string(),
		/** name of the file, where the error speaks of one */
		file: z.string().nullable().optional(),
		row: z.number().int().nullable(),
		column: z.string().nullable(),
		remedy: z.string(),
		/** with `needs_answer` only */
		question: importQuestionSchema.optional()
	})
});
export type ErrorDocument = z.infer<typeof errorDocumentSchema>;
