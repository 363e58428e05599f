import { z } from 'zod';
import { channelSchema } from './channels.ts';

/**
 * What only a person can say about a file before it can be read: carried by the refusal `needs_answer`. The answer is a column mapping
 * (`columnMappingSchema`) with `header` and `index` of these columns.
 */
export const importQuestionSchema = z.object({
	kind: z.literal('columns'),
	/** one sentence, to be shown as it stands */
	text: z.string(),
	/** channels of which the answer must name at least one each group */
	needs: z.array(z.array(channelSchema)),
	columns: z.array(
		z.object({
			header: z.string(),
			/** 0-based */
			index: z.number().int().nonnegative(),
			samples: z.array(z.string()),
			/** what its values look like; null: nothing */
			suggested: channelSchema.nullable()
		})
	)
});
export type ImportQuestion = z.infer<typeof importQuestionSchema>;
