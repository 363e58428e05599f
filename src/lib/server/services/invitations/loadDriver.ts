import type { IntakeView } from '../../../schemas/intake.ts';
import type { NotebookView } from '../../../schemas/views.ts';
import { keptPeople } from '../../access/seenRuns.ts';
import type { Viewer } from '../../access/viewer.ts';
import { database } from '../../db/database.ts';
import { decodePublicId, encodePublicId } from '../../db/publicId.ts';
import { listIntakes } from '../intake.ts';
import { loadNotebook } from '../loadNotebook.ts';
import { listReceived, whatIsSeen } from './grants.ts';

/** One driver as their coach sees them: what was granted, runs, progress, intake. */
export interface DriverView {
	notebook: NotebookView;
	/** newest version first; empty while nobody wrote one */
	intakes: IntakeView[];
	/** what the driver lets the viewer see, with since when; empty for oneself and for minors in one's care */
	grants: { what: string; since: string; through: string | null }[];
	/** may the viewer write the intake */
	isKept: boolean;
}

/** @throws 404 when the viewer may see nothing of that person */
export async function loadDriver(viewer: Viewer, personId: string): Promise<DriverView> {
	const db = database();
	// First, alone: it decides whether anything may be said at all.
	const notebook = await loadNotebook(viewer, personId);
	const [intakes, received, kept, person] = await Promise.all([
		listIntakes(viewer, personId),
		listReceived(db, viewer),
		keptPeople(db, viewer),
		db('people')
			.where({ public_id: decodePublicId(personId) })
			.first<{ id: number }>('id')
	]);
	return {
		notebook,
		intakes,
		grants: received
			.filter((grant) => encodePublicId(grant.owner_public_id) === personId)
			.map((grant) => ({
				what: whatIsSeen(grant),
				since: grant.from_at.toISOString(),
				through: grant.person_name === null ? grant.organisation_name : null
			})),
		isKept: kept.includes(person.id)
	};
}
