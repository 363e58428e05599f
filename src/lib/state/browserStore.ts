/** What the browser keeps beyond a page: files on their way, and folders that are watched. */
const NAME = 'kerbnote';
const VERSION = 1;
export const KEPT_FILES = 'files';
export const WATCHED_FOLDERS = 'folders';
type Store = typeof KEPT_FILES | typeof WATCHED_FOLDERS;

let opening: Promise<IDBDatabase> | null = null;

function open(): Promise<IDBDatabase> {
	opening ??= new Promise<IDBDatabase>((resolve, reject) => {
		const request = indexedDB.open(NAME, VERSION);
		request.onupgradeneeded = () => {
			for (const store of [KEPT_FILES, WATCHED_FOLDERS]) request.result.createObjectStore(store);
		};
		request.onsuccess = () => resolve(request.result);
		request.onerror = () => reject(request.error);
	}).catch((error: unknown) => {
		opening = null;
		throw error;
	});
	return opening;
}

async function ask<Answer>(
	store: Store,
	mode: IDBTransactionMode,
	question: (objects: IDBObjectStore) => IDBRequest<Answer>
): Promise<Answer> {
	const transaction = (await open()).transaction(store, mode);
	return await new Promise((resolve, reject) => {
		const request = question(transaction.objectStore(store));
		transaction.oncomplete = () => resolve(request.result);
		transaction.onerror = () => reject(transaction.error);
		transaction.onabort = () => reject(transaction.error);
	});
}

export async function putKept(store: Store, key: string, value: unknown): Promise<void> {
	await ask(store, 'readwrite', (objects) => objects.put(value, key));
}

export async function dropKept(store: Store, key: string): Promise<void> {
	await ask(store, 'readwrite', (objects) => objects.delete(key));
}

/** Everything of a store, with its keys; what it is must be checked by who asks. */
export async function listKept(store: Store): Promise<{ key: string; value: unknown }[]> {
	const [keys, values] = await Promise.all([
		ask<IDBValidKey[]>(store, 'readonly', (objects) => objects.getAllKeys()),
		ask<unknown[]>(store, 'readonly', (objects) => objects.getAll())
	]);
	return keys.map((key, index) => ({ key: String(key), value: values[index] }));
}
