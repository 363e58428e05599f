import { problemSchema } from '../schemas/api.ts';
import { uploadHeadSchema, type UploadHead } from '../schemas/views.ts';
import { UploadFault, type UploadProblem } from './UploadQueue.svelte.ts';

const UPLOADS = '/api/v1/uploads';

/**
 * Hands a file over as it is, in one PUT: XMLHttpRequest, because fetch tells nothing about how much is sent.
 *
 * @param onprogress gets 0–1 of the bytes
 * @throws {UploadFault} with what the server said, or that the line broke; the signal's reason when it was aborted
 */
export function sendFile(file: File, onprogress: (share: number) => void, signal: AbortSignal): Promise<UploadHead> {
	return new Promise((resolve, reject) => {
		const request = new XMLHttpRequest();
		request.open('PUT', `${UPLOADS}?${new URLSearchParams({ name: file.name })}`);
		request.setRequestHeader('Content-Type', 'application/octet-stream');
		request.upload.onprogress = ({ loaded, total }) => onprogress(total > 0 ? loaded / total : 0);
		request.onload = () => {
			try {
				resolve(readAnswer(request.status, request.responseText));
			} catch (error) {
				reject(error);
			}
		};
		request.onerror = () => reject(new UploadFault(LINE_BROKEN));
		request.onabort = () => reject(signal.reason);
		signal.addEventListener('abort', () => request.abort(), { once: true });
		request.send(file);
	});
}

/** How far the import of an upload is. */
export async function askUpload(id: string, signal: AbortSignal): Promise<UploadHead> {
	const response = await fetch(`${UPLOADS}/${id}`, { signal, headers: { accept: 'application/json' } });
	return readAnswer(response.status, await response.text());
}

const LINE_BROKEN: UploadProblem = {
	message: 'The file did not arrive',
	remedy: 'Check the connection and send it again',
	again: true
};

/** Statuses after which the same file may simply be sent again. */
const PASSING = new Set([408, 429, 502, 503, 504]);

function readAnswer(status: number, text: string): UploadHead {
	if (status >= 200 && status < 300) return uploadHeadSchema.parse(JSON.parse(text));
	const again = PASSING.has(status) || status === 0;
	const problem = problemSchema.safeParse(parseJson(text));
	if (!problem.success) throw new UploadFault({ ...LINE_BROKEN, again: true });
	const { detail, remedy } = problem.data;
	throw new UploadFault({ message: detail, remedy: remedy ?? (again ? 'Try again in a while' : ''), again });
}

function parseJson(text: string): unknown {
	try {
		return JSON.parse(text);
	} catch {
		return null;
	}
}
