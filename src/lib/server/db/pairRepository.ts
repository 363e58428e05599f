import type { Knex } from 'knex';
import { z } from 'zod';
import type { FullThrottleModel } from '../../analysis/car/fullThrottle.ts';
import { warningSchema } from '../../schemas/analysisDocument.ts';
import { brakeUnitSchema } from '../../schemas/channels.ts';
import { editedCircuits } from '../access/seenLayouts.ts';
import type { Viewer } from '../access/viewer.ts';
import { headRowSchema, seenLaps } from './lapRepository.ts';

const pairRowSchema = headRowSchema.extend({
	brake_unit: brakeUnitSchema.nullable(),
	brake_full: z.number().nullable(),
	brake_scale_assumed: z.number(),
	full_throttle: z.custom<FullThrottleModel | null>((value) => value === null || typeof value === 'object'),
	warnings: z.array(warningSchema),
	/** when a name on the layout was last changed */
	layout_named_at: z.date(),
	circuit_named_at: z.date(),
	may_edit: z.number()
});

/** A lap with all that laying it on another one needs, but its columns and metrics. */
export type PairLap = z.infer<typeof pairRowSchema>;

/**
 * Two laps, each only if the viewer may see it, in one question: it is asked before any answer, also before one that is
 * kept ready.
 *
 * @param ids of the laps, as `decodePublicId` gives them
 */
export async function findPairLaps(db: Knex, viewer: Viewer, ids: readonly Buffer[]): Promise<PairLap[]> {
	const rows: unknown = await seenLaps(db, viewer)
		.join('layouts', 'layouts.id', 'runs.layout_id')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.whereIn('laps.public_id', ids)
		.select(
			'analyses.brake_unit',
			'analyses.brake_full',
			'analyses.brake_scale_assumed',
			'analyses.full_throttle',
			'analyses.warnings',
			{ layout_named_at: 'layouts.updated_at', circuit_named_at: 'circuits.updated_at' },
			db.raw('? AS may_edit', [editedCircuits(db, viewer)])
		);
	return z.array(pairRowSchema).parse(rows);
}
