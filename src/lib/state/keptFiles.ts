import { z } from 'zod';
import { dropKept, KEPT_FILES, listKept, putKept } from './browserStore.ts';
import type { KeptFiles } from './transfer.ts';
import { fingerprintOf, isLocked } from './tusTransfer.ts';

/** Larger files are not copied into the browser's store: after a reload a person chooses them once more. */
const LARGEST_BYTES = 64 * 1024 * 1024;
/** What nobody came back for. */
const OLDEST_MS = 24 * 60 * 60 * 1000;

const keptSchema = z.object({ personId: z.string(), file: z.instanceof(Blob), keptAt: z.number() });

/** Files of one person that have not arrived yet; a page that is loaded anew finds them here and sends the rest. */
export function keptFilesOf(personId: string): KeptFiles {
	return {
		keep: async (file) => {
			if (file.size > LARGEST_BYTES) return;
			await putKept(KEPT_FILES, fingerprintOf(personId, file), { personId, file, keptAt: Date.now() });
		},
		drop: async (file) => await dropKept(KEPT_FILES, fingerprintOf(personId, file)),
		list: async () => {
			const files: File[] = [];
			for (const { key, value } of await listKept(KEPT_FILES).catch(() => [])) {
				const kept = keptSchema.safeParse(value);
				if (!kept.success || Date.now() - kept.data.keptAt > OLDEST_MS) await dropKept(KEPT_FILES, key);
				else if (kept.data.personId === personId && kept.data.file instanceof File && !(await isLocked(key))) {
					files.push(kept.data.file);
				}
			}
			return files;
		}
	};
}
