import { environment, type Environment } from '../environment.ts';
import { LaterStore } from './laterStore.ts';
import { LocalRawStore } from './localRawStore.ts';
import type { RawStore } from './rawStore.ts';

let shared: RawStore | undefined;

/** The raw store of this process: a bucket where one is configured, else a folder. */
export function rawStore(): RawStore {
	return (shared ??= storeOf(environment()));
}

function storeOf(settings: Environment): RawStore {
	const { KERBNOTE_S3_ENDPOINT, KERBNOTE_S3_BUCKET, KERBNOTE_S3_REGION, KERBNOTE_S3_KEY, KERBNOTE_S3_SECRET } =
		settings;
	if (!KERBNOTE_S3_ENDPOINT || !KERBNOTE_S3_BUCKET || !KERBNOTE_S3_KEY || !KERBNOTE_S3_SECRET) {
		return new LocalRawStore(settings.KERBNOTE_STORAGE);
	}
	return new LaterStore(async () => {
		const { S3RawStore } = await import('./s3RawStore.ts');
		return new S3RawStore({
			endpoint: KERBNOTE_S3_ENDPOINT,
			bucket: KERBNOTE_S3_BUCKET,
			region: KERBNOTE_S3_REGION,
			key: KERBNOTE_S3_KEY,
			secret: KERBNOTE_S3_SECRET
		});
	});
}

/** Where the raw file of an upload lies. */
export function storageKeyOf(publicId: string): string {
	// The last characters are as random as the first, whose first carries only three bits.
	return `${publicId.slice(-2)}/${publicId}`;
}
