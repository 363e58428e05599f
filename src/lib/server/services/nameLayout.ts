import type { LayoutNames } from '../../schemas/api.ts';
import { editedCircuits } from '../access/seenLayouts.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { decodePublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { notFound } from '../http/notFound.ts';

/**
 * Gives a circuit, its layout and its corners the names that people use.
 *
 * @throws 404 when there is no such layout or corner, or the viewer may not name it
 */
export async function nameLayout(viewer: Viewer, layoutId: string, names: LayoutNames): Promise<void> {
	const db = database();
	const key = decodePublicId(layoutId) ?? notFound();
	const layout = await db('layouts')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.where('layouts.public_id', key)
		.where(editedCircuits(db, viewer))
		.first<{ id: number; circuit_id: number } | undefined>('layouts.id', 'layouts.circuit_id');
	if (!layout) notFound();
	await retryOnDeadlock(db, async (trx) => {
		if (names.circuitName !== undefined)
			await trx('circuits').where({ id: layout.circuit_id }).update({ name: names.circuitName });
		if (names.layoutName !== undefined)
			await trx('layouts').where({ id: layout.id }).update({ name: names.layoutName });
		// Answers that hold a name are kept under the time of the last change, also of a corner's.
		await trx('layouts')
			.where({ id: layout.id })
			.update({ updated_at: trx.raw('CURRENT_TIMESTAMP(3)') });
		for (const [cornerId, name] of Object.entries(names.corners ?? {})) {
			const corner: unknown = await trx('corners')
				.where({ public_id: decodePublicId(cornerId), layout_id: layout.id })
				.first('id');
			if (!corner) notFound();
			await trx('corners')
				.where({ public_id: decodePublicId(cornerId) })
				.update({ name });
		}
	});
}
