/** What can be corrected in a run, in one table. */
export interface RunFields {
	/** ISO 8601; null where nobody knows */
	startedAt: string | null;
	/** public id of the layout */
	layout: string;
	/** name; null where none is said */
	car: string | null;
}
export type RunField = keyof RunFields;

export type SaveState = { kind: 'idle' } | { kind: 'saving' } | { kind: 'saved' } | { kind: 'failed'; message: string };

/** Writes one field of a run; resolves when it is kept. */
export type SaveField = (runId: string, change: Partial<RunFields>) => Promise<void>;

interface Change {
	runId: string;
	field: RunField;
	from: string | null;
	to: string | null;
}

/**
 * Corrections of many runs: each is kept at once, and each step can be undone, the last one first. What cannot be kept goes back to what it
 * was, with a word on why.
 */
export class RunCorrections {
	#values = $state<Record<string, RunFields>>({});
	#states = $state<Record<string, SaveState>>({});
	#steps = $state.raw<readonly (readonly Change[])[]>([]);
	readonly #save: SaveField;
	readonly #textOf: (error: unknown) => string;

	constructor(
		runs: readonly ({ id: string } & RunFields)[],
		save: SaveField,
		textOf: (error: unknown) => string = () => 'That was not kept; try again'
	) {
		for (const { id, startedAt, layout, car } of runs) this.#values[id] = { startedAt, layout, car };
		this.#save = save;
		this.#textOf = textOf;
	}

	valueOf(runId: string): RunFields {
		return this.#values[runId];
	}

	stateOf(runId: string): SaveState {
		return this.#states[runId] ?? { kind: 'idle' };
	}

	get mayUndo(): boolean {
		return this.#steps.length > 0;
	}

	/** Sets one field of one or more runs: one step, whatever it takes. */
	async set(runIds: readonly string[], field: RunField, to: string | null): Promise<void> {
		const changes = runIds
			.map((runId): Change => ({ runId, field, from: this.#values[runId][field], to }))
			.filter(({ from }) => from !== to);
		if (changes.length === 0) return;
		const kept = await this.#keep(changes);
		if (kept.length > 0) this.#steps = [...this.#steps, kept];
	}

	/** Takes the last step back. */
	async undo(): Promise<void> {
		const step = this.#steps.at(-1);
		if (!step) return;
		this.#steps = this.#steps.slice(0, -1);
		await this.#keep(step.map(({ from, to, ...change }) => ({ ...change, from: to, to: from })));
	}

	/** @returns those changes that were kept */
	async #keep(changes: readonly Change[]): Promise<Change[]> {
		const kept: Change[] = [];
		for (const change of changes) this.#put(change.runId, change.field, change.to);
		for (const change of changes) {
			const { runId, field, from, to } = change;
			this.#states[runId] = { kind: 'saving' };
			try {
				await this.#save(runId, { [field]: to });
				this.#states[runId] = { kind: 'saved' };
				kept.push(change);
			} catch (error) {
				this.#put(runId, field, from);
				this.#states[runId] = { kind: 'failed', message: this.#textOf(error) };
			}
		}
		return kept;
	}

	#put(runId: string, field: RunField, value: string | null): void {
		const fields = this.#values[runId];
		if (field === 'layout') {
			if (value !== null) fields.layout = value;
		} else fields[field] = value;
	}
}
