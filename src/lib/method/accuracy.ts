import { z } from 'zod';

/** The table that the accuracy command measures and writes: how far numbers were from laps whose answer is known. */
export const accuracySchema = z.object({
	/** what was measured against what, one sentence */
	note: z.string(),
	rows: z.array(
		z.object({
			quantity: z.string(),
			unit: z.string(),
			/** "60 Hz", "60 Hz with noise" */
			rate: z.string(),
			count: z.number().int(),
			median: z.number().nullable(),
			p95: z.number().nullable(),
			worst: z.number().nullable(),
			/** what must hold at the 95th percentile; null where nothing is promised */
			bar: z.number().nullable()
		})
	)
});
export type Accuracy = z.infer<typeof accuracySchema>;
