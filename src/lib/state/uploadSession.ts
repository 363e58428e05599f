import { FolderWatch } from './FolderWatch.svelte.ts';
import { UploadQueue } from './UploadQueue.svelte.ts';
import { uploadDoorOf } from './uploadDoor.ts';
import { folderDoorOf } from './watchedFolder.ts';

interface UploadSession {
	personId: string;
	queue: UploadQueue;
	folder: FolderWatch;
}
let session: UploadSession | null = null;

/** The one queue and the one watch of this tab: files go on their way while a person reads other pages. Only in the browser. */
export function uploadSession(personId: string): UploadSession {
	if (session?.personId === personId) return session;
	session?.queue.stop();
	session?.folder.end();
	const queue = new UploadQueue(uploadDoorOf(personId));
	const folder = new FolderWatch(folderDoorOf(personId), (files) => queue.add(files));
	session = { personId, queue, folder };
	void queue.begin();
	void folder.begin();
	return session;
}
