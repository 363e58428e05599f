import { z } from 'zod';

/**
 * What a coach may ask of a driver in one corner (or of a lap), in trade words. Limits are in the unit of the kind (see
 * `analysis/targets/targetKinds.ts`), as measured: a limit on a pressure would stay a pressure.
 */
export const targetKindSchema = z.enum([
	'peak_brake',
	'brake_rise',
	'one_application',
	'onset',
	'lift',
	'turn_in',
	'release',
	'trail_until',
	'trail',
	'light_hold',
	'minimum_speed',
	'approach_speed',
	'exit_speed',
	'pick_up',
	'full_throttle',
	'no_second_lift',
	'overlap',
	'coasting',
	'idle_gap',
	'no_lock_up',
	'steering_corrections',
	'onset_spread',
	'minimum_speed_spread',
	'corner_time',
	'lap_time',
	'free'
]);
export type TargetKind = z.infer<typeof targetKindSchema>;

/** What the limits are counted from. */
export const targetBaseSchema = z.enum(['value', 'own_median', 'reference']);
export type TargetBase = z.infer<typeof targetBaseSchema>;

const limit = z.number().finite().min(-100_000).max(100_000).nullable();

export const targetSchema = z
	.object({
		kind: targetKindSchema,
		/** the value must be at least this; null: no lower limit */
		least: limit,
		/** the value must be at most this; null: no upper limit */
		most: limit,
		/** limits as they stand, or added to the driver's own median or the reference's value */
		base: targetBaseSchema,
		scope: z.object({
			/** only laps of dry runs are scored */
			dryOnly: z.boolean(),
			/** only laps after this one of a run; null: all */
			afterLap: z.number().int().min(0).max(1000).nullable(),
			/** how many laps of a run must meet it: `laps` of `of`; null: told as a rate only */
			holdsOver: z
				.object({ laps: z.number().int().min(1).max(200), of: z.number().int().min(1).max(200) })
				.refine(({ laps, of }) => laps <= of, 'no more laps can meet it than are driven')
				.nullable()
		}),
		/** a lap that meets it and loses time in the corner is said to */
		notSlower: z.boolean(),
		/** the coach's own words; a free target has nothing else */
		text: z.string().trim().max(500)
	})
	.superRefine((target, context) => {
		const refuse = (path: string, message: string) => context.addIssue({ code: 'custom', path: [path], message });
		const isCounted = ['one_application', 'no_second_lift', 'no_lock_up', 'free'].includes(target.kind);
		if (isCounted) {
			if (target.least !== null || target.most !== null) refuse('most', 'this target has no limit of its own');
			if (target.base !== 'value') refuse('base', 'this target is not counted from another value');
		} else if (target.least === null && target.most === null) refuse('most', 'say a least or a most value');
		if (target.least !== null && target.most !== null && target.least > target.most) {
			refuse('most', 'the most must not be less than the least');
		}
		if (target.kind === 'free' && target.text === '') refuse('text', 'say what the driver should do');
	});
export type Target = z.infer<typeof targetSchema>;

/** Why a lap says nothing about a target. */
export const unscoredReasonSchema = z.enum([
	'free_text',
	'not_dry',
	'early_lap',
	'not_clean',
	'neutralised',
	'not_measured',
	'no_base',
	'too_few_laps'
]);
export type UnscoredReason = z.infer<typeof unscoredReasonSchema>;

export const lapScoreSchema = z.object({
	lap: z.number().int(),
	outcome: z.enum(['met', 'missed', 'unscored']),
	reason: unscoredReasonSchema.nullable(),
	/** what was measured, in the kind's unit */
	value: z.number().nullable(),
	/** outside the limit by this much; 0 where it is met */
	missedBy: z.number().nullable(),
	/** beyond the limit, and within what can be known of it: it counts as met */
	withinUncertainty: z.boolean(),
	/** met, and the corner took longer than usual: null where that is not asked or not known */
	slower: z.boolean().nullable()
});
export type LapScore = z.infer<typeof lapScoreSchema>;

export const runScoreSchema = z.object({
	laps: z.array(lapScoreSchema),
	met: z.number().int(),
	scored: z.number().int(),
	/** enough laps in a row of the run's last ones, where the target says how many; null where it does not */
	holds: z.boolean().nullable(),
	/** mean corner time of laps that met it minus that of laps that did not, with its 95 % interval; null under two of each */
	paidS: z.object({ differenceS: z.number(), low: z.number(), high: z.number() }).nullable(),
	/** laps that met it and were slower in the corner */
	metButSlower: z.number().int()
});
export type RunScore = z.infer<typeof runScoreSchema>;
