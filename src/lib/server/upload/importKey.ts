/** One import for each reading of an upload: what a person changes about it makes a new one. */
export function importKey(uploadId: number, revision: number): string {
	return `importRun:${uploadId}:${revision}`;
}
