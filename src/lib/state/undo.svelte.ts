export interface UndoNotice {
	key: number;
	/** what was done: "vallmere.csv is deleted" */
	text: string;
	undo: () => Promise<void>;
	/** stands while it is undone, then what came of it */
	outcome: 'offered' | 'working' | 'undone' | 'failed';
}

/** Long enough to read it and to reach it by keyboard; afterwards the list of what was deleted has it. */
const STANDS_MS = 20_000;
const OUTCOME_STANDS_MS = 4000;

/** What was just done and can be undone, for the whole app: it stays while pages change. Filled in the browser only. */
class UndoList {
	#notices = $state<UndoNotice[]>([]);
	#nextKey = 0;
	#held = false;

	get notices(): readonly UndoNotice[] {
		return this.#notices;
	}

	offer(text: string, undo: () => Promise<void>): void {
		const key = this.#nextKey++;
		this.#notices.push({ key, text, undo, outcome: 'offered' });
		this.#endLater(key, STANDS_MS);
	}

	async undo(key: number): Promise<void> {
		const notice = this.#notices.find((one) => one.key === key);
		if (notice?.outcome !== 'offered') return;
		notice.outcome = 'working';
		try {
			await notice.undo();
			notice.outcome = 'undone';
		} catch {
			notice.outcome = 'failed';
		}
		this.#endLater(key, OUTCOME_STANDS_MS);
	}

	end(key: number): void {
		const place = this.#notices.findIndex((one) => one.key === key);
		if (place >= 0) this.#notices.splice(place, 1);
	}

	/** While a person points at it or is in it, nothing goes away. */
	hold(held: boolean): void {
		this.#held = held;
	}

	#endLater(key: number, ms: number): void {
		setTimeout(() => {
			const notice = this.#notices.find((one) => one.key === key);
			if (this.#held || notice?.outcome === 'working') this.#endLater(key, OUTCOME_STANDS_MS);
			else this.end(key);
		}, ms);
	}
}

export const undoList = new UndoList();
