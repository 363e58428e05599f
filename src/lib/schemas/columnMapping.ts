import { z } from 'zod';
import { channelSchema } from './channels.ts';

/** What a person says about the columns of a file; columns that are not named are recognised by themselves. */
export const columnMappingSchema = z.object({
	columns: z
		.array(
			z.object({
				/** the header as it stands in the file */
				header: z.string().max(1000),
				/** 0-based column, where two columns bear the same header */
				index: z.number().int().nonnegative().optional(),
				/** null: leave the column out */
				channel: channelSchema.nullable(),
				/** unit in the file, as in `SourceColumn.unit`; absent: as declared, else by the values */
				unit: z.string().max(20).optional(),
				/**
				 * its values count the other way: steering with right positive, a pedal that rests at its largest value. A sign that the path or
				 * the pedals' own work shows is still put right afterwards
				 */
				turned: z.boolean().optional()
			})
		)
		.max(1000)
});
export type ColumnMapping = z.infer<typeof columnMappingSchema>;
