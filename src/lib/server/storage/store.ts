import { environment } from '../environment.ts';
import { LocalRawStore } from './localRawStore.ts';
import type { RawStore } from './rawStore.ts';

let shared: RawStore | undefined;

/** The raw store of this process. */
export function rawStore(): RawStore {
	return (shared ??= new LocalRawStore(environment().KERBNOTE_STORAGE));
}

/** Where the raw file of an upload lies. */
export function storageKeyOf(publicId: string): string {
	// The last characters are as random as the first, whose first carries only three bits.
	return `${publicId.slice(-2)}/${publicId}`;
}
