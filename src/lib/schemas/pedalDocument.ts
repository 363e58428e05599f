import { z } from 'zod';

/** The JSON document of `analyse --pedal`, "kerbnote.pedal/1". Field names are fixed: add, never rename. */

const nullable = z.number().nullable();
const intervalSchema = z.tuple([z.number(), z.number()]).nullable();

export const pedalVerdictSchema = z.enum(['linear', 'progressive', 'degressive', 'unknown']);
export type PedalVerdict = z.infer<typeof pedalVerdictSchema>;

/** Why a field is null or the verdict unknown. */
export const pedalReasonSchema = z.enum([
	/** no column with a force, weights or travel: the exponent needs a known input */
	'no_known_input',
	/** the sweep ends before the pedal's full output */
	'partial_sweep',
	/** fewer points than the curve has parameters to tell */
	'too_few_points',
	/** the interval is wider than the bar of the verdict */
	'too_noisy',
	/** the curve is no power of the input */
	'not_a_power_curve',
	/** the output stays at rest */
	'no_output',
	/** nowhere off the straight line */
	'no_departure',
	/** only pressed, or only released */
	'one_direction',
	/** the output's full value is not known and was not reached */
	'full_scale_unknown',
	/** never back at rest */
	'no_rest'
]);
export type PedalReason = z.infer<typeof pedalReasonSchema>;

export const pedalWarningSchema = z.enum([
	'columns_assumed',
	'input_scale_assumed',
	'output_scale_assumed',
	'offset_removed',
	'bad_rows',
	'outliers'
]);
export type PedalWarning = z.infer<typeof pedalWarningSchema>;

export const pedalHalfSchema = z.object({
	/** % of the input between dead zone and saturation */
	fromPct: z.number(),
	toPct: z.number(),
	gamma: nullable,
	gammaCi95: intervalSchema,
	/** output minus the straight line over the whole active range, signed, % of output */
	largestDeparturePct: nullable,
	verdict: pedalVerdictSchema
});
export type PedalHalf = z.infer<typeof pedalHalfSchema>;

export const pedalDocumentSchema = z.object({
	schema: z.literal('kerbnote.pedal/1'),
	/** exponent of output = input^γ between dead zone and saturation */
	gamma: nullable,
	gammaCi95: intervalSchema,
	/** % of the full input below which nothing comes out; without a known input, % of the output that is skipped at the start */
	deadZonePct: nullable,
	/** % of the full input at which the output is full; without a known input, the highest output reached in % */
	saturationPct: nullable,
	/** largest difference to the straight line between dead zone and saturation, signed, % of output: below it is negative */
	largestDeparturePct: nullable,
	/** where, 0–1 between dead zone and saturation */
	departureAtInput: nullable,
	/** how much less input holds the same output while releasing, % of the full input */
	hysteresisPct: nullable,
	verdict: pedalVerdictSchema,
	reasons: z.record(z.string(), pedalReasonSchema),
	halves: z.array(pedalHalfSchema),
	/** standard deviation of the output about the curve, % of output */
	noisePct: nullable,
	/** change of the level at rest from the first to the last rest, % of output */
	driftPct: nullable,
	/** how often the pedal was pressed */
	sweeps: z.number().int(),
	samples: z.number().int(),
	input: z.object({ header: z.string(), unit: z.string(), full: z.number() }).nullable(),
	output: z.object({ header: z.string(), unit: z.string(), full: nullable }),
	warnings: z.array(pedalWarningSchema)
});
export type PedalDocument = z.infer<typeof pedalDocumentSchema>;
