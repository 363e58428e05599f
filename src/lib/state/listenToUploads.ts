import { z } from 'zod';
import { publicIdSchema, uploadHeadSchema } from '../schemas/views.ts';
import type { UploadListener } from './transfer.ts';

const EVENTS = '/api/v1/events';
const goneSchema = z.object({ id: publicIdSchema });
/** Between two tries after the server closed the door for good, as a proxy does in mid-restart. */
const AGAIN_MS = [1000, 2000, 5000, 10_000, 30_000];

/**
 * Hears from the server what becomes of the viewer's uploads.
 *
 * @returns stops listening
 */
export function listenToUploads({ onhead, ongone, onopen }: UploadListener): () => void {
	let source: EventSource | null = null;
	let timer: ReturnType<typeof setTimeout> | undefined;
	let tries = 0;

	function open() {
		const opened = new EventSource(EVENTS);
		source = opened;
		opened.onopen = () => {
			tries = 0;
			onopen();
		};
		opened.addEventListener('upload', ({ data }: MessageEvent<unknown>) => {
			const head = uploadHeadSchema.safeParse(parseJson(data));
			if (head.success) onhead(head.data);
		});
		opened.addEventListener('gone', ({ data }: MessageEvent<unknown>) => {
			const gone = goneSchema.safeParse(parseJson(data));
			if (gone.success) ongone(gone.data.id);
		});
		// The browser takes up a line that broke by itself; one that was refused it leaves closed.
		opened.onerror = () => {
			if (opened.readyState !== EventSource.CLOSED) return;
			timer = setTimeout(open, AGAIN_MS[Math.min(tries++, AGAIN_MS.length - 1)]);
		};
	}

	open();
	return () => {
		clearTimeout(timer);
		source?.close();
	};
}

function parseJson(data: unknown): unknown {
	try {
		return typeof data === 'string' ? JSON.parse(data) : null;
	} catch {
		return null;
	}
}
