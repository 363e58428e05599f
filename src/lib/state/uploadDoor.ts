import { uploadHeadSchema } from '../schemas/views.ts';
import { askApi } from './answers.ts';
import { keptFilesOf } from './keptFiles.ts';
import { listenToUploads } from './listenToUploads.ts';
import type { UploadDoor } from './transfer.ts';
import { tusTransfer } from './tusTransfer.ts';

const UPLOADS = '/api/v1/uploads';

/** The server as it stands behind this page, for the person who is signed in. */
export function uploadDoorOf(personId: string): UploadDoor {
	return {
		open: (file, events) => tusTransfer(personId, file, events),
		ask: async (id, signal) => await askApi(`${UPLOADS}/${id}`, { signal }, uploadHeadSchema),
		remove: async (id, how) => {
			if (how === 'delete') await askApi(`${UPLOADS}/${id}`, { method: 'DELETE' }, null);
			else {
				const headers = { 'Tus-Resumable': '1.0.0' };
				await askApi(`${UPLOADS}/resumable/${id}`, { method: 'DELETE', headers }, null);
			}
		},
		restore: async (id) => await askApi(`${UPLOADS}/${id}/restore`, { method: 'POST' }, uploadHeadSchema),
		listen: listenToUploads,
		kept: keptFilesOf(personId)
	};
}
