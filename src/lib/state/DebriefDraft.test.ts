import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { DebriefContent } from '../schemas/debrief.ts';
import { DebriefDraft, type SaveOutcome } from './DebriefDraft.svelte.ts';

const content = (opening: string): DebriefContent => ({ opening, signature: 'Rhea', sections: [], tasks: [] });

/** A server that holds one text, and a line that may be dead. */
function makeServer(opening = 'one') {
	const server = { revision: 1, content: content(opening), reached: true, saves: 0 };
	const save = async (revision: number, to: DebriefContent): Promise<SaveOutcome> => {
		server.saves++;
		if (!server.reached) return { kind: 'unreached' };
		if (revision !== server.revision) return { kind: 'conflict', revision: server.revision, theirs: server.content };
		server.revision++;
		server.content = to;
		return { kind: 'saved', revision: server.revision };
	};
	return { server, save };
}

function makeStore() {
	const kept = new Map<string, string>();
	return {
		getItem: (key: string) => kept.get(key) ?? null,
		setItem: (key: string, value: string) => void kept.set(key, value),
		removeItem: (key: string) => void kept.delete(key),
		size: () => kept.size
	};
}

function open({ server, save }: ReturnType<typeof makeServer>, store = makeStore()) {
	const draft = new DebriefDraft({
		id: 'a',
		revision: server.revision,
		content: server.content,
		save,
		store,
		read: (kept) => kept as { revision: number; content: DebriefContent } | null
	});
	const write = (opening: string) => {
		draft.content.opening = opening;
		draft.changed();
	};
	return { draft, write, store };
}

beforeEach(() => void vi.useFakeTimers());
afterEach(() => void vi.useRealTimers());

describe('DebriefDraft', () => {
	it('saves once after a pause, not at every letter', async () => {
		const made = makeServer();
		const { draft, write, store } = open(made);
		for (const text of ['t', 'tw', 'two']) write(text);
		expect(draft.state).toBe('changed');
		await vi.advanceTimersByTimeAsync(800);
		expect(made.server).toMatchObject({ saves: 1, content: content('two') });
		expect(draft.state).toBe('saved');
		expect(store.size()).toBe(0);
	});

	it('keeps what a dead line does not take, and sends it when the line is back', async () => {
		const made = makeServer();
		const { draft, write, store } = open(made);
		made.server.reached = false;
		write('two');
		await vi.advanceTimersByTimeAsync(10_000);
		expect(draft.state).toBe('unreached');
		expect(store.size()).toBe(1);
		made.server.reached = true;
		await vi.advanceTimersByTimeAsync(5000);
		expect(made.server.content.opening).toBe('two');
		expect(draft.state).toBe('saved');
	});

	it('goes on after the page was closed on a dead line', async () => {
		const made = makeServer();
		const first = open(made);
		made.server.reached = false;
		first.write('two');
		await vi.advanceTimersByTimeAsync(1000);
		first.draft.end();
		made.server.reached = true;
		const second = open(made, first.store);
		expect(second.draft.content.opening).toBe('two');
		await vi.advanceTimersByTimeAsync(100);
		expect(made.server.content.opening).toBe('two');
	});

	it('overwrites nothing that another window saved, and lets the person choose', async () => {
		const made = makeServer();
		const [first, second] = [open(made), open(made)];
		first.write('from the first');
		await vi.advanceTimersByTimeAsync(800);
		second.write('from the second');
		await vi.advanceTimersByTimeAsync(20_000);
		expect(second.draft.state).toBe('conflict');
		expect(second.draft.conflict?.theirs.opening).toBe('from the first');
		expect(made.server.content.opening).toBe('from the first');
		second.write('from the second, longer');
		await vi.advanceTimersByTimeAsync(20_000);
		expect(made.server.content.opening, 'while they choose').toBe('from the first');
		await second.draft.choose('mine');
		expect(made.server.content.opening).toBe('from the second, longer');
	});

	it('takes the other text, and one’s own back by undo', async () => {
		const made = makeServer();
		const [first, second] = [open(made), open(made)];
		first.write('from the first');
		await vi.advanceTimersByTimeAsync(800);
		second.write('mine');
		await vi.advanceTimersByTimeAsync(800);
		await second.draft.choose('theirs');
		expect(second.draft.content.opening).toBe('from the first');
		second.draft.undo();
		expect(second.draft.content.opening).toBe('mine');
		await vi.advanceTimersByTimeAsync(800);
		expect(made.server.content.opening).toBe('mine');
	});

	it('undoes step by step, and saves that', async () => {
		const made = makeServer();
		const { draft, write } = open(made);
		write('two');
		write('three');
		draft.undo();
		expect(draft.content.opening).toBe('two');
		draft.undo();
		expect(draft.content.opening).toBe('one');
		expect(draft.mayUndo).toBe(false);
		await vi.advanceTimersByTimeAsync(800);
		expect(made.server.content.opening).toBe('one');
	});

	it('waits for what is being saved before it is sent', async () => {
		const made = makeServer();
		const { draft, write } = open(made);
		write('two');
		expect(await draft.settle()).toBe('saved');
		expect(made.server.content.opening).toBe('two');
		expect(draft.revision).toBe(2);
	});
});
