import type { UploadHead } from '../schemas/views.ts';
import { describeProgress } from '../texts/uploads.ts';
import { LINE_BROKEN, UploadFault, type UploadDoor, type UploadProblem } from './transfer.ts';
import { UploadRow } from './UploadRow.svelte.ts';

/** How long what happened is gathered before it is said aloud. */
const NEWS_AFTER_MS = 1200;

/**
 * Files on their way to the server: sent one after the other, so that each has the whole line, while the server says by itself how
 * far it is with those that arrived. One for each tab; it goes on while pages change.
 */
export class UploadQueue {
	#rows = $state<UploadRow[]>([]);
	/** what a screen reader says: sums up, and only when a file is done */
	news = $state('');
	readonly #door: UploadDoor;
	readonly #newsAfterMs: number;
	readonly #stopped = new AbortController();
	#nextKey = 0;
	#newsTimer: ReturnType<typeof setTimeout> | undefined;
	#listeners: { id: string; onhead: (head: UploadHead) => void }[] = [];

	constructor(door: UploadDoor, { newsAfterMs = NEWS_AFTER_MS } = {}) {
		this.#door = door;
		this.#newsAfterMs = newsAfterMs;
	}

	get rows(): readonly UploadRow[] {
		return this.#rows;
	}

	/** Listens to the server and takes up what a page that was left or loaded anew had begun. */
	async begin(): Promise<void> {
		const stopListening = this.#door.listen({
			onhead: (head) => this.#hear(head),
			ongone: (id) => this.#take((row) => row.id === id && row.phase !== 'failed'),
			onopen: () => void this.#askAll()
		});
		this.#stopped.signal.addEventListener('abort', stopListening, { once: true });
		this.add(await this.#door.kept.list(), { keep: false });
	}

	stop(): void {
		this.#stopped.abort();
		clearTimeout(this.#newsTimer);
		for (const row of this.#rows) if (row.isSending) void row.transfer?.pause();
	}

	/** Hears what the server says of one upload; returns how to stop. */
	listen(id: string, onhead: (head: UploadHead) => void): () => void {
		const listener = { id, onhead };
		this.#listeners.push(listener);
		return () => (this.#listeners = this.#listeners.filter((one) => one !== listener));
	}

	add(files: readonly File[], { keep = true } = {}): void {
		for (const file of files) {
			const known = this.#rows.find((row) => row.file !== null && isSameFile(row.file, file) && !row.isDone);
			if (known) {
				if (known.phase === 'paused') this.resume(known);
				continue;
			}
			// What the server knows of it becomes this row, once the transfer has found the upload again.
			this.#take((row) => row.phase === 'elsewhere' && isBegunFrom(row, file));
			this.#rows.push(new UploadRow(this.#nextKey++, file.name, file.size, file));
			// A browser that keeps nothing (private window, full disk) only loses the way back after a reload.
			if (keep) this.#door.kept.keep(file).catch(() => {});
		}
		this.#pump();
	}

	/** Stops a file; what has arrived stays on the server. */
	async pause(row: UploadRow): Promise<void> {
		if (row.phase !== 'waiting' && !row.isSending) return;
		row.phase = 'paused';
		await row.transfer?.pause();
		this.#pump();
	}

	resume(row: UploadRow): void {
		if (row.phase !== 'paused') return;
		row.phase = 'waiting';
		this.#pump();
	}

	/** Sends a file again whose way was cut for good; it goes on where it stopped. */
	retry(row: UploadRow): void {
		row.problem = null;
		row.phase = 'waiting';
		this.#pump();
	}

	/** Gives up what is on its way, and takes it off the list. */
	async cancel(row: UploadRow): Promise<void> {
		const { phase, transfer, id } = row;
		row.phase = 'paused';
		this.#take((one) => one === row);
		this.#forget(row);
		if (transfer) await transfer.giveUp().catch(() => {});
		else if (phase === 'elsewhere' && id !== null) await this.#door.remove(id, 'give_up');
		this.#pump();
	}

	/**
	 * Takes an upload that has arrived out of sight, with what was read of it.
	 *
	 * @returns how to undo it; null where there is nothing to take away
	 */
	async remove(row: UploadRow): Promise<(() => Promise<void>) | null> {
		const { id } = row;
		if (id === null) return null;
		const place = this.#rows.indexOf(row);
		await this.#door.remove(id, 'delete');
		this.#take((one) => one === row);
		return async () => {
			row.head = await this.#door.restore(id);
			// The server may have said it already, and a row of its own may stand for it.
			this.#take((one) => one.id === id);
			this.#rows.splice(Math.min(place, this.#rows.length), 0, row);
		};
	}

	/** Takes a row off the list that has no more to say. */
	dismiss(row: UploadRow): void {
		this.#take((one) => one === row);
	}

	/** The next file that waits takes the line, where it is free. */
	#pump(): void {
		if (this.#stopped.signal.aborted || this.#rows.some((row) => row.isSending)) return;
		const row = this.#rows.find(({ phase }) => phase === 'waiting');
		if (!row?.file) return;
		row.phase = 'sending';
		row.transfer ??= this.#open(row, row.file);
		row.transfer.start();
	}

	#open(row: UploadRow, file: File) {
		return this.#door.open(file, {
			oncreated: (id) => {
				row.id = id;
				// The server may have said it before the transfer knew its name.
				this.#take((other) => other !== row && other.id === id && other.file === null);
			},
			onprogress: (sentBytes) => {
				row.sentBytes = sentBytes;
				if (row.phase === 'cut') row.phase = 'sending';
			},
			oncut: () => {
				if (row.phase === 'sending') row.phase = 'cut';
			},
			onarrived: ({ id, knownBefore }) => {
				row.id = id;
				row.knownBefore = knownBefore;
				row.sentBytes = row.sizeBytes;
				row.phase = 'arrived';
				this.#take((other) => other !== row && other.id === id && other.file === null);
				this.#forget(row);
				void this.#ask(row);
				this.#pump();
			},
			onfault: (problem) => {
				row.problem = problem;
				row.phase = 'failed';
				row.transfer = null;
				if (!problem.again) this.#forget(row);
				this.#tell();
				this.#pump();
			}
		});
	}

	#hear(head: UploadHead): void {
		for (const { id, onhead } of this.#listeners) if (id === head.id) onhead(head);
		const rows = this.#rows.filter((row) => row.id === head.id);
		if (rows.length === 0) {
			// A file of this tab that has not found its upload again yet will speak for it.
			const isOurs = ({ file, id }: UploadRow) => file !== null && id === null && isBegunFrom(head, file);
			if (head.state === 'receiving' && this.#rows.some(isOurs)) return;
			const row = new UploadRow(this.#nextKey++, head.fileName, head.sizeBytes, null);
			row.id = head.id;
			row.phase = 'elsewhere';
			this.#rows.push(row);
			rows.push(row);
		}
		for (const row of rows) {
			const isOurs = row.file !== null && row.phase !== 'arrived';
			// Of a file that this tab sends, the transfer knows more until it has arrived.
			if (isOurs || row.phase === 'failed') continue;
			row.head = head;
			row.sentBytes = head.receivedBytes;
			row.phase = head.state === 'receiving' ? 'elsewhere' : 'arrived';
			if (row.isDone) this.#tell();
		}
	}

	async #askAll(): Promise<void> {
		await Promise.all(this.#rows.filter((row) => row.id !== null && !row.isDone).map((row) => this.#ask(row)));
	}

	async #ask(row: UploadRow): Promise<void> {
		if (row.id === null || row.isSending || this.#stopped.signal.aborted) return;
		try {
			this.#hear(await this.#door.ask(row.id, this.#stopped.signal));
		} catch (error) {
			// The file is safe on the server: a line that breaks for a moment is asked again when it is back.
			if (error instanceof UploadFault && !error.problem.again && row.phase !== 'paused')
				this.#fail(row, error.problem);
		}
	}

	#fail(row: UploadRow, problem: UploadProblem): void {
		if (row.phase === 'elsewhere') this.#take((one) => one === row);
		else {
			row.problem = problem;
			row.phase = 'failed';
			this.#tell();
		}
	}

	#take(isOut: (row: UploadRow) => boolean): void {
		for (let index = this.#rows.length - 1; index >= 0; index--) {
			if (isOut(this.#rows[index])) this.#rows.splice(index, 1);
		}
	}

	#forget({ file }: UploadRow): void {
		if (file !== null) this.#door.kept.drop(file).catch(() => {});
	}

	#tell(): void {
		clearTimeout(this.#newsTimer);
		this.#newsTimer = setTimeout(() => (this.news = describeProgress(this.#rows)), this.#newsAfterMs);
	}
}

/** May what the server has begun to receive be of this file? */
function isBegunFrom(begun: { sizeBytes: number; name?: string; fileName?: string }, file: File) {
	return (begun.name ?? begun.fileName) === file.name && begun.sizeBytes === file.size;
}

/** The same file chosen again: browsers give a new object each time. */
function isSameFile(one: File, other: File) {
	return one.name === other.name && one.size === other.size && one.lastModified === other.lastModified;
}

/** What a person reads of a failure that nobody foresaw. */
export function problemOf(error: unknown): UploadProblem {
	return error instanceof UploadFault ? error.problem : LINE_BROKEN;
}
