import { z } from 'zod';
import { dropKept, listKept, putKept, WATCHED_FOLDERS } from './browserStore.ts';

/** A folder on the person's disk, as the File System Access API gives it. */
declare global {
	interface Window {
		showDirectoryPicker?: (options?: {
			id?: string;
			mode?: 'read' | 'readwrite';
		}) => Promise<FileSystemDirectoryHandle>;
	}
	interface FileSystemHandle {
		queryPermission?: (descriptor: { mode: 'read' }) => Promise<PermissionState>;
		requestPermission?: (descriptor: { mode: 'read' }) => Promise<PermissionState>;
	}
}

/** What stood in a folder when it was looked at: path in it, and the file as it was then. */
export interface FolderEntry {
	path: string;
	file: File;
}

/** What is remembered of a watched folder. */
export interface FolderMemory {
	/** by path: size and time of change of what was sent, or was there before */
	seen: Record<string, string>;
	isPaused: boolean;
	sent: number;
}

/** The person's disk, as the watch sees it. */
export interface FolderDoor {
	/** can this browser watch a folder at all */
	isSupported: boolean;
	/** asks the person; null when they chose none */
	choose: () => Promise<WatchableFolder | null>;
	/** the folder that was watched before the page was loaded anew */
	recall: () => Promise<{ folder: WatchableFolder; memory: FolderMemory } | null>;
	remember: (folder: WatchableFolder, memory: FolderMemory) => Promise<void>;
	forget: () => Promise<void>;
	/** keeps other tabs from watching too; null when one does already */
	claim: () => Promise<(() => void) | null>;
}

export interface WatchableFolder {
	name: string;
	mayRead: () => Promise<boolean>;
	/** only after a click: browsers ask the person */
	askToRead: () => Promise<boolean>;
	/** @throws when it is gone or may no longer be read */
	list: () => Promise<FolderEntry[]>;
	handle: FileSystemDirectoryHandle | null;
}

/** Loggers put sessions into folders by day; deeper than this nobody writes. */
const DEEPEST = 3;
const LAP_FILE = /\.(csv|txt|tsv|gz|zip)$/i;

const memorySchema = z.object({
	personId: z.string(),
	handle: z.custom<FileSystemDirectoryHandle>(
		(value) => typeof FileSystemDirectoryHandle === 'function' && value instanceof FileSystemDirectoryHandle
	),
	memory: z.object({ seen: z.record(z.string(), z.string()), isPaused: z.boolean(), sent: z.number() })
});

/** Folders of this browser, watched for one person. */
export function folderDoorOf(personId: string): FolderDoor {
	return {
		isSupported: typeof window.showDirectoryPicker === 'function',
		choose: async () => {
			try {
				const handle = await window.showDirectoryPicker?.({ id: 'kerbnote-laps', mode: 'read' });
				return handle ? watchable(handle) : null;
			} catch (error) {
				// What the browser throws when the person closes the dialogue.
				if (error instanceof DOMException && error.name === 'AbortError') return null;
				throw error;
			}
		},
		recall: async () => {
			for (const { key, value } of await listKept(WATCHED_FOLDERS).catch(() => [])) {
				if (key !== personId) continue;
				const kept = memorySchema.safeParse(value);
				if (kept.success) return { folder: watchable(kept.data.handle), memory: kept.data.memory };
			}
			return null;
		},
		remember: async ({ handle }, memory) => await putKept(WATCHED_FOLDERS, personId, { personId, handle, memory }),
		forget: async () => await dropKept(WATCHED_FOLDERS, personId),
		claim: async () => {
			if (!('locks' in navigator)) return () => {};
			return await new Promise((resolve) => {
				void navigator.locks.request(`kerbnote-folder-${personId}`, { ifAvailable: true }, (lock) =>
					lock === null ? resolve(null) : new Promise<void>((release) => resolve(() => release()))
				);
			});
		}
	};
}

function watchable(handle: FileSystemDirectoryHandle): WatchableFolder {
	return {
		name: handle.name || 'chosen folder',
		handle,
		mayRead: async () => (await handle.queryPermission?.({ mode: 'read' })) !== 'prompt' && (await isGranted(handle)),
		askToRead: async () =>
			(await handle.requestPermission?.({ mode: 'read' })) !== 'denied' && (await isGranted(handle)),
		list: async () => {
			const entries: FolderEntry[] = [];
			await collect(handle, '', DEEPEST, entries);
			return entries;
		}
	};
}

/** A browser without the question has given the right with the folder. */
async function isGranted(handle: FileSystemDirectoryHandle): Promise<boolean> {
	return ((await handle.queryPermission?.({ mode: 'read' })) ?? 'granted') === 'granted';
}

async function collect(folder: FileSystemDirectoryHandle, at: string, depth: number, into: FolderEntry[]) {
	for await (const [name, handle] of folder.entries()) {
		if (name.startsWith('.')) continue;
		if (handle instanceof FileSystemDirectoryHandle) {
			if (depth > 1) await collect(handle, `${at}${name}/`, depth - 1, into);
		} else if (handle instanceof FileSystemFileHandle && LAP_FILE.test(name)) {
			// A file that is renamed or taken away between the list and here is not there.
			const file = await handle.getFile().catch(() => null);
			if (file) into.push({ path: at + name, file });
		}
	}
}
