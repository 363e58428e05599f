import type { DebriefContent } from '../schemas/debrief.ts';

/** What came of a save. */
export type SaveOutcome =
	| { kind: 'saved'; revision: number }
	/** somebody else wrote in between */
	| { kind: 'conflict'; revision: number; theirs: DebriefContent }
	/** nobody was reached: the same may be sent later */
	| { kind: 'unreached' }
	/** it is not taken, and will not be the next time */
	| { kind: 'refused'; message: string };

export interface DebriefDraftOptions {
	id: string;
	revision: number;
	content: DebriefContent;
	save: (revision: number, content: DebriefContent) => Promise<SaveOutcome>;
	/** keeps what could not be sent; null where there is none */
	store: Pick<Storage, 'getItem' | 'setItem' | 'removeItem'> | null;
	/** checks what the store gives back */
	read: (kept: unknown) => { revision: number; content: DebriefContent } | null;
}

export type DraftState = 'saved' | 'changed' | 'saving' | 'unreached' | 'conflict' | 'refused';

/** A pause in typing after which it is saved. */
const PAUSE_MS = 700;
const AGAIN_MS = 4000;
const MOST_UNDO = 100;

/**
 * What a coach writes on one debrief: saved by itself after each pause, kept in the browser while the line is dead and sent later, never
 * over what another window saved.
 */
export class DebriefDraft {
	content = $state<DebriefContent>({ opening: '', signature: '', sections: [], tasks: [] });
	#state = $state<DraftState>('saved');
	#conflict = $state.raw<{ revision: number; theirs: DebriefContent } | null>(null);
	#message = $state('');
	#undo = $state.raw<string[]>([]);
	#revision: number;
	#last: string;
	#timer: ReturnType<typeof setTimeout> | undefined;
	#running: Promise<void> | null = null;
	readonly #options: DebriefDraftOptions;

	constructor(options: DebriefDraftOptions) {
		this.#options = options;
		this.#revision = options.revision;
		this.content = structuredClone(options.content);
		this.#last = JSON.stringify(options.content);
		this.#takeKept();
	}

	get state(): DraftState {
		return this.#state;
	}
	/** the revision that the server holds */
	get revision(): number {
		return this.#revision;
	}
	/** what stands on the server, where somebody else wrote in between */
	get conflict(): { revision: number; theirs: DebriefContent } | null {
		return this.#conflict;
	}
	get message(): string {
		return this.#message;
	}
	get mayUndo(): boolean {
		return this.#undo.length > 0;
	}

	/** Call it after each change of the content. */
	changed(): void {
		const now = JSON.stringify(this.content);
		if (now === this.#last) return;
		this.#undo = [...this.#undo.slice(1 - MOST_UNDO), this.#last];
		this.#take(now);
	}

	/** Takes the last change back; that is a change too, and is saved. */
	undo(): void {
		const before = this.#undo.at(-1);
		if (before === undefined) return;
		this.#undo = this.#undo.slice(0, -1);
		this.content = JSON.parse(before) as DebriefContent;
		this.#take(before);
	}

	/** Saves at once what is not saved, and waits for it. */
	async settle(): Promise<DraftState> {
		clearTimeout(this.#timer);
		await this.#running;
		if (this.#state === 'changed' || this.#state === 'unreached') await this.#save();
		return this.#state;
	}

	/** Chooses between the two texts: one's own goes over what stands there, which the person has read. */
	async choose(which: 'theirs' | 'mine'): Promise<void> {
		const conflict = this.#conflict;
		if (!conflict) return;
		this.#revision = conflict.revision;
		this.#conflict = null;
		if (which === 'theirs') {
			this.#undo = [...this.#undo, this.#last];
			this.content = structuredClone(conflict.theirs);
			this.#last = JSON.stringify(conflict.theirs);
			this.#state = 'saved';
			this.#forget();
			return;
		}
		this.#state = 'changed';
		await this.#save();
	}

	/** Nothing is saved any more. */
	end(): void {
		clearTimeout(this.#timer);
	}

	#take(now: string): void {
		this.#last = now;
		if (this.#state !== 'conflict') this.#state = 'changed';
		this.#keep();
		this.#later(PAUSE_MS);
	}

	#later(ms: number): void {
		clearTimeout(this.#timer);
		if (this.#state === 'conflict') return;
		this.#timer = setTimeout(() => void this.#save(), ms);
	}

	async #save(): Promise<void> {
		if (this.#running) {
			await this.#running;
			if (this.#state === 'changed') await this.#save();
			return;
		}
		this.#running = this.#send();
		await this.#running;
		this.#running = null;
	}

	async #send(): Promise<void> {
		const sent = this.#last;
		this.#state = 'saving';
		const outcome = await this.#options.save(this.#revision, JSON.parse(sent) as DebriefContent);
		if (outcome.kind === 'saved') {
			this.#revision = outcome.revision;
			if (this.#last === sent) {
				this.#state = 'saved';
				this.#forget();
			} else {
				this.#state = 'changed';
				this.#keep();
				this.#later(PAUSE_MS);
			}
		} else if (outcome.kind === 'conflict') {
			this.#conflict = { revision: outcome.revision, theirs: outcome.theirs };
			this.#state = 'conflict';
		} else if (outcome.kind === 'unreached') {
			this.#state = 'unreached';
			this.#later(AGAIN_MS);
		} else {
			this.#message = outcome.message;
			this.#state = 'refused';
		}
	}

	get #key(): string {
		return `kerbnote-debrief-${this.#options.id}`;
	}

	#keep(): void {
		this.#options.store?.setItem(this.#key, JSON.stringify({ revision: this.#revision, content: this.content }));
	}

	#forget(): void {
		this.#options.store?.removeItem(this.#key);
	}

	/** What an earlier visit could not send: it goes on from there, and a save tells whether somebody wrote in between. */
	#takeKept(): void {
		const text = this.#options.store?.getItem(this.#key) ?? null;
		if (text === null) return;
		let kept: unknown = null;
		try {
			kept = JSON.parse(text);
		} catch {
			// What cannot be read cannot be sent.
		}
		const found = this.#options.read(kept);
		if (!found || JSON.stringify(found.content) === this.#last) return this.#forget();
		this.#undo = [this.#last];
		this.content = found.content;
		this.#revision = found.revision;
		this.#last = JSON.stringify(found.content);
		this.#state = 'changed';
		this.#later(0);
	}
}
