import type { FolderDoor, FolderEntry, FolderMemory, WatchableFolder } from './watchedFolder.ts';

/**
 * `permission`: the browser asks again after the page was loaded anew; `elsewhere`: another tab watches; `lost`: the folder is not
 * there any more.
 */
export type WatchState = 'unsupported' | 'off' | 'watching' | 'paused' | 'permission' | 'elsewhere' | 'lost';

const LOOK_EVERY_MS = 3000;
/** A logger that writes lap by lap is quiet in between: only a file that nobody wrote to for this long is complete. */
const QUIET_MS = 10_000;

/** Sends each new file of a folder by itself, once it is complete, and never twice. One for each tab. */
export class FolderWatch {
	state = $state<WatchState>('off');
	/** of the folder; null while none is watched */
	name = $state<string | null>(null);
	/** files that went up since the folder was chosen */
	sent = $state(0);
	/** names of files that are still being written */
	growing = $state.raw<readonly string[]>([]);
	/** files that were there when the folder was chosen, and are not sent by themselves */
	older = $state.raw<readonly FolderEntry[]>([]);

	readonly #door: FolderDoor;
	readonly #onfiles: (files: File[]) => void;
	readonly #lookEveryMs: number;
	readonly #quietMs: number;
	readonly #now: () => number;
	#folder: WatchableFolder | null = null;
	#memory: FolderMemory = { seen: {}, isPaused: false, sent: 0 };
	/** by path: the stamp of the last look, and since when it stands */
	#still: Record<string, { stamp: string; since: number } | undefined> = {};
	#timer: ReturnType<typeof setTimeout> | undefined;
	#release: (() => void) | null = null;

	constructor(
		door: FolderDoor,
		onfiles: (files: File[]) => void,
		{ lookEveryMs = LOOK_EVERY_MS, quietMs = QUIET_MS, now = () => Date.now() } = {}
	) {
		this.#door = door;
		this.#onfiles = onfiles;
		this.#lookEveryMs = lookEveryMs;
		this.#quietMs = quietMs;
		this.#now = now;
		if (!door.isSupported) this.state = 'unsupported';
	}

	/** Takes up the folder that was watched before the page was loaded anew. */
	async begin(): Promise<void> {
		if (!this.#door.isSupported) return;
		const kept = await this.#door.recall();
		if (kept === null) return;
		this.#folder = kept.folder;
		this.#memory = kept.memory;
		this.name = kept.folder.name;
		this.sent = kept.memory.sent;
		if (kept.memory.isPaused) this.state = 'paused';
		else await this.#start();
	}

	/** Asks for a folder. What is in it now stays, unless `sendOlder` is called. */
	async choose(): Promise<void> {
		const folder = await this.#door.choose();
		if (folder === null) return;
		this.#rest();
		this.#folder = folder;
		this.name = folder.name;
		this.sent = 0;
		const entries = await folder.list();
		this.older = entries;
		this.#memory = {
			seen: Object.fromEntries(entries.map((entry) => [entry.path, stampOf(entry)])),
			isPaused: false,
			sent: 0
		};
		await this.#remember();
		await this.#start();
	}

	/** Sends what was in the folder when it was chosen. */
	async sendOlder(): Promise<void> {
		const files = this.older.map(({ file }) => file);
		this.older = [];
		await this.#send(files);
	}

	async pause(): Promise<void> {
		this.#rest();
		this.state = 'paused';
		this.#memory.isPaused = true;
		await this.#remember();
	}

	/** After a click: the browser may ask whether the folder may be read. */
	async resume(): Promise<void> {
		if (this.#folder === null) return;
		this.#memory.isPaused = false;
		if (!(await this.#folder.mayRead()) && !(await this.#folder.askToRead())) {
			this.state = 'permission';
			return;
		}
		await this.#remember();
		await this.#start();
	}

	async stop(): Promise<void> {
		this.#rest();
		this.#folder = null;
		this.name = null;
		this.older = [];
		this.state = 'off';
		await this.#door.forget();
	}

	/** Ends with its tab; the folder is remembered. */
	end(): void {
		this.#rest();
	}

	async #start(): Promise<void> {
		if (this.#folder === null) return;
		if (!(await this.#folder.mayRead())) {
			this.state = 'permission';
			return;
		}
		this.#release ??= await this.#door.claim();
		if (this.#release === null) {
			this.state = 'elsewhere';
			return;
		}
		this.state = 'watching';
		await this.look();
	}

	#rest(): void {
		clearTimeout(this.#timer);
		this.#still = {};
		this.growing = [];
		this.#release?.();
		this.#release = null;
	}

	/** One look at the folder, then the next in a while. */
	async look(): Promise<void> {
		const folder = this.#folder;
		if (folder === null || this.state !== 'watching') return;
		let entries: FolderEntry[];
		try {
			entries = await folder.list();
		} catch {
			this.#rest();
			this.state = (await folder.mayRead().catch(() => false)) ? 'lost' : 'permission';
			return;
		}
		// It may have been paused or changed while the disk was asked.
		if (folder !== this.#folder || this.state !== 'watching') return;
		const fresh = entries.filter((entry) => this.#memory.seen[entry.path] !== stampOf(entry));
		const complete = fresh.filter((entry) => this.#isComplete(entry));
		this.growing = fresh.filter((entry) => !complete.includes(entry)).map(({ path }) => path);
		if (complete.length > 0) {
			for (const entry of complete) {
				this.#memory.seen[entry.path] = stampOf(entry);
				this.#still[entry.path] = undefined;
			}
			await this.#send(complete.map(({ file }) => file));
		}
		this.#timer = setTimeout(() => void this.look(), this.#lookEveryMs);
	}

	/** Nothing changed since an earlier look, nor for a while by the file's own time. Empty files are not begun yet. */
	#isComplete(entry: FolderEntry): boolean {
		const stamp = stampOf(entry);
		const known = this.#still[entry.path];
		if (known?.stamp !== stamp) {
			this.#still[entry.path] = { stamp, since: this.#now() };
			return false;
		}
		return entry.file.size > 0 && this.#now() - known.since >= this.#quietMs;
	}

	async #send(files: File[]): Promise<void> {
		this.#onfiles(files);
		this.sent += files.length;
		this.#memory.sent = this.sent;
		await this.#remember();
	}

	/** A browser that keeps nothing watches only until the page is left. */
	async #remember(): Promise<void> {
		if (this.#folder) await this.#door.remember(this.#folder, $state.snapshot(this.#memory)).catch(() => {});
	}
}

function stampOf({ file }: FolderEntry) {
	return `${file.size}-${file.lastModified}`;
}
