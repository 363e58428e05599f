import { z } from 'zod';

/** The JSON document of `analyse --stint`, "kerbnote.stint/1". Field names are fixed: add, never rename. */

const intervalSchema = z.tuple([z.number(), z.number()]);

/** Why a lap says nothing of the pace. */
export const stintLapReasonSchema = z.enum([
	/** leaves the pits or starts from standing */
	'out_lap',
	/** ends in the pits */
	'in_lap',
	/** slow phase or red flag */
	'neutralised',
	/** marked, or not clean, in the file */
	'marked',
	/** first laps on cold tyres */
	'warm_up',
	/** beyond the robust line: traffic, a mistake, a lift */
	'slow',
	/** far quicker than the line: a cut, or a lap that was not whole */
	'too_quick',
	/** no time that can be read */
	'no_time',
	/** of another stint in the same file */
	'other_stint'
]);
export type StintLapReason = z.infer<typeof stintLapReasonSchema>;

export const stintWarningSchema = z.enum([
	/** fewer than six representative laps: the interval says how little that tells */
	'few_laps',
	/** fewer than three: no line */
	'too_few_laps',
	/** the pace bends: one line does not describe it */
	'knee',
	/** a net slope: without a fuel effect it is no tyre fall-off */
	'fuel_unknown',
	/** the file holds more stints; the longest is judged */
	'more_stints',
	'lap_numbers_missing',
	'bad_rows'
]);
export type StintWarning = z.infer<typeof stintWarningSchema>;

export const stintLapSchema = z.object({
	number: z.number().int(),
	timeS: z.number().nullable(),
	representative: z.boolean(),
	reason: stintLapReasonSchema.nullable()
});
export type StintLap = z.infer<typeof stintLapSchema>;

export const stintFitSchema = z.object({
	n: z.number().int(),
	/** net slope: what a lap adds, tyres and fuel together */
	slopeSPerLap: z.number(),
	/** at lap 0 */
	interceptS: z.number(),
	slopeSe: z.number(),
	slopeCi95: intervalSchema,
	/** consistency: standard deviation about the line */
	residualSdS: z.number(),
	theilSenSPerLap: z.number(),
	/** of neighbouring residuals, −1 … 1 */
	residualAutocorrelation: z.number()
});
export type StintFitDocument = z.infer<typeof stintFitSchema>;

export const kneeSchema = z.object({
	/** last lap of the first part */
	lap: z.number().int(),
	slopeBeforeSPerLap: z.number(),
	slopeAfterSPerLap: z.number()
});

export const stintDocumentSchema = z.object({
	schema: z.literal('kerbnote.stint/1'),
	laps: z.array(stintLapSchema),
	fit: stintFitSchema.nullable(),
	/** tyre fall-off: the net slope less what burnt fuel gives */
	fuelCorrected: z.object({ slopeSPerLap: z.number(), slopeSe: z.number() }).nullable(),
	knee: kneeSchema.nullable(),
	bestS: z.number().nullable(),
	medianS: z.number().nullable(),
	warnings: z.array(stintWarningSchema)
});
export type StintDocument = z.infer<typeof stintDocumentSchema>;
