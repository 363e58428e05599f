import type { UploadHead } from '../schemas/views.ts';
import { isSettled } from '../texts/uploads.ts';
import type { Transfer, UploadProblem } from './transfer.ts';

/**
 * Where a file is on its way: `cut` goes on by itself when the line is back, `elsewhere` is known from the server alone (sent by
 * another tab or device, or begun before the page was loaded anew), `arrived` is the server's from then on.
 */
export type UploadPhase = 'waiting' | 'sending' | 'cut' | 'paused' | 'elsewhere' | 'arrived' | 'failed';

/** One file on its way. */
export class UploadRow {
	phase = $state<UploadPhase>('waiting');
	sentBytes = $state(0);
	/** of the upload on the server, as soon as there is one */
	id = $state<string | null>(null);
	head = $state.raw<UploadHead | null>(null);
	problem = $state.raw<UploadProblem | null>(null);
	/** was the same file here before, so that `id` is that of the earlier upload */
	knownBefore = $state(false);
	/** null where only the server knows of it */
	file: File | null;
	transfer: Transfer | null = null;

	constructor(
		readonly key: number,
		readonly name: string,
		readonly sizeBytes: number,
		file: File | null
	) {
		this.file = file;
	}

	/** Does it take the line? */
	get isSending() {
		return this.phase === 'sending' || this.phase === 'cut';
	}
	/** Is there nothing more to come by itself? */
	get isDone() {
		return this.phase === 'failed' || (this.head !== null && this.phase === 'arrived' && isSettled(this.head));
	}
	get isUnderstood() {
		return this.head?.state === 'analysed' && this.phase === 'arrived';
	}
}
