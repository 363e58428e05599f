import type { UploadHead } from '../schemas/views.ts';
import { isSettled } from '../texts/uploads.ts';

/** Why a file is not here, and what to do. */
export interface UploadProblem {
	message: string;
	remedy: string;
	/** may the same file simply be sent again */
	again: boolean;
}

/** Thrown by `send` and `ask` for what a person can read. */
export class UploadFault extends Error {
	constructor(readonly problem: UploadProblem) {
		super(problem.message);
		this.name = 'UploadFault';
	}
}

/** The server, as the queue sees it. */
export interface UploadDoor {
	/** hands one file over; resolves with what the server made of it */
	send: (file: File, onprogress: (share: number) => void, signal: AbortSignal) => Promise<UploadHead>;
	/** how far the import is */
	ask: (id: string, signal: AbortSignal) => Promise<UploadHead>;
}

/** One file on its way. */
export class UploadRow {
	/** 0–1 of its bytes */
	sent = $state(0);
	head = $state.raw<UploadHead | null>(null);
	problem = $state.raw<UploadProblem | null>(null);
	isSending = $state(false);

	constructor(
		readonly key: number,
		readonly file: File
	) {}

	get isWaiting() {
		return !this.isSending && this.head === null && this.problem === null;
	}
	get isDone() {
		return this.problem !== null || (this.head !== null && isSettled(this.head));
	}
}

/** Between two questions about imports that are under way. */
const ASK_EVERY_MS = 600;

/**
 * Files on their way to the server: sent one after the other, so that each has the whole line, while those that arrived are
 * asked after. One for each page; `stop` when the page goes.
 */
export class UploadQueue {
	#rows = $state<UploadRow[]>([]);
	readonly #door: UploadDoor;
	readonly #askEveryMs: number;
	readonly #stopped = new AbortController();
	#nextKey = 0;
	#sending: Promise<void> | null = null;
	#asking: Promise<void> | null = null;

	constructor(door: UploadDoor, { askEveryMs = ASK_EVERY_MS } = {}) {
		this.#door = door;
		this.#askEveryMs = askEveryMs;
	}

	get rows(): readonly UploadRow[] {
		return this.#rows;
	}

	add(files: readonly File[]): void {
		for (const file of files) this.#rows.push(new UploadRow(this.#nextKey++, file));
		this.#start();
	}

	/** Sends a file again whose way was cut. */
	retry(row: UploadRow): void {
		row.problem = null;
		row.head = null;
		row.sent = 0;
		this.#start();
	}

	stop(): void {
		this.#stopped.abort();
	}

	/** Resolves when nothing is under way. */
	async settled(): Promise<void> {
		while (this.#sending !== null || this.#asking !== null) await Promise.all([this.#sending, this.#asking]);
	}

	/** Both loops look once more when they have ended: a row may have come between their last look and their end. */
	#start(): void {
		this.#sending ??= this.#sendAll().finally(() => {
			this.#sending = null;
			if (!this.#stopped.signal.aborted && this.#rows.some((row) => row.isWaiting)) this.#start();
		});
	}

	#watch(): void {
		this.#asking ??= this.#askAll().finally(() => {
			this.#asking = null;
			if (!this.#stopped.signal.aborted && this.#openRows().length > 0) this.#watch();
		});
	}

	#openRows(): UploadRow[] {
		return this.#rows.filter((row) => row.head !== null && !row.isDone);
	}

	async #sendAll(): Promise<void> {
		let row: UploadRow | undefined;
		while (!this.#stopped.signal.aborted && (row = this.#rows.find(({ isWaiting }) => isWaiting)) !== undefined) {
			const sending = row;
			sending.isSending = true;
			try {
				sending.head = await this.#door.send(sending.file, (share) => (sending.sent = share), this.#stopped.signal);
				sending.sent = 1;
				this.#watch();
			} catch (error) {
				sending.problem = problemOf(error);
			} finally {
				sending.isSending = false;
			}
		}
	}

	async #askAll(): Promise<void> {
		const { signal } = this.#stopped;
		for (;;) {
			const open = this.#openRows();
			if (open.length === 0 || signal.aborted) return;
			await pause(this.#askEveryMs, signal);
			await Promise.all(open.map((row) => this.#askOne(row)));
		}
	}

	async #askOne(row: UploadRow): Promise<void> {
		if (row.head === null || this.#stopped.signal.aborted) return;
		try {
			row.head = await this.#door.ask(row.head.id, this.#stopped.signal);
		} catch (error) {
			// The file is safe on the server: a line that breaks for a moment is asked again.
			if (error instanceof UploadFault && !error.problem.again) row.problem = error.problem;
		}
	}
}

function problemOf(error: unknown): UploadProblem {
	if (error instanceof UploadFault) return error.problem;
	return { message: 'The file did not arrive', remedy: 'Check the connection and send it again', again: true };
}

function pause(ms: number, signal: AbortSignal): Promise<void> {
	return new Promise((resolve) => {
		const timer = setTimeout(resolve, ms);
		signal.addEventListener(
			'abort',
			() => {
				clearTimeout(timer);
				resolve();
			},
			{ once: true }
		);
	});
}
