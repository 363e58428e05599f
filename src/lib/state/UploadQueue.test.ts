import { describe, expect, it } from 'vitest';
import type { UploadHead } from '../schemas/views.ts';
import { LINE_BROKEN, UploadFault, type TransferEvents, type UploadDoor, type UploadListener } from './transfer.ts';
import { UploadQueue } from './UploadQueue.svelte.ts';

const head = (id: string, changes: Partial<UploadHead> = {}): UploadHead => ({
	id,
	fileName: id,
	kind: 'file',
	archive: null,
	sizeBytes: 3,
	receivedBytes: 3,
	state: 'stored',
	stage: 'waiting',
	progress: 0,
	rowsRead: null,
	createdAt: '2026-05-14T18:05:00.000Z',
	error: null,
	runIds: [],
	...changes
});
const file = (name: string) => new File(['a,b'], name, { lastModified: 1 });

/** A server whose transfers and words the test says one by one. */
function door(changes: Partial<UploadDoor> = {}) {
	const log: string[] = [];
	const transfers = new Map<string, TransferEvents>();
	const kept = new Map<string, File>();
	let listener: UploadListener | null = null;
	const queue = new UploadQueue(
		{
			open: ({ name }, events) => {
				transfers.set(name, events);
				return {
					start: () => log.push(`start ${name}`),
					pause: async () => void log.push(`pause ${name}`),
					giveUp: async () => void log.push(`give up ${name}`)
				};
			},
			ask: async (id) => head(id),
			remove: async (id, how) => void log.push(`${how} ${id}`),
			restore: async (id) => head(id, { state: 'analysed' }),
			listen: (listening) => {
				listener = listening;
				return () => (listener = null);
			},
			kept: {
				keep: async (one) => void kept.set(one.name, one),
				drop: async ({ name }) => void kept.delete(name),
				list: async () => [...kept.values()]
			},
			...changes
		},
		{ newsAfterMs: 0 }
	);
	const way = (name: string) => {
		const events = transfers.get(name);
		if (!events) throw new Error(`no transfer of ${name} was opened`);
		return events;
	};
	return {
		log,
		kept,
		queue,
		way,
		say: (said: UploadHead) => listener?.onhead(said),
		gone: (id: string) => listener?.ongone(id),
		reopen: () => listener?.onopen(),
		isListening: () => listener !== null
	};
}
/** Lets what is asked be answered. */
const settle = () => new Promise((resolve) => setTimeout(resolve, 5));

describe('UploadQueue', () => {
	it('sends one file after the other and hears from the server until each is settled', async () => {
		const { log, queue, way, say } = door();
		await queue.begin();
		queue.add([file('a.csv'), file('b.csv')]);
		expect(log).toEqual(['start a.csv']);
		way('a.csv').oncreated('a');
		way('a.csv').onprogress(2);
		expect(queue.rows[0]).toMatchObject({ phase: 'sending', sentBytes: 2, id: 'a' });
		way('a.csv').onarrived({ id: 'a', knownBefore: false });
		expect(log).toEqual(['start a.csv', 'start b.csv']);
		await settle();
		say(head('a', { state: 'reading', stage: 'laps' }));
		expect(queue.rows[0].isDone).toBe(false);
		say(head('a', { state: 'analysed' }));
		expect(queue.rows.map((row) => row.isDone)).toEqual([true, false]);
		await settle();
		expect(queue.news).toBe('Of two files one is understood and one still on the way.');
	});

	it('gives the line to the next file while one is paused, and goes on with it later', async () => {
		const { log, queue, way } = door();
		queue.add([file('a.csv'), file('b.csv')]);
		await queue.pause(queue.rows[0]);
		expect(log).toEqual(['start a.csv', 'pause a.csv', 'start b.csv']);
		queue.resume(queue.rows[0]);
		expect(queue.rows[0].phase).toBe('waiting');
		way('b.csv').onarrived({ id: 'b', knownBefore: false });
		expect(log.at(-1)).toBe('start a.csv');
	});

	it('shows a line that broke, and that it goes on', () => {
		const { queue, way } = door();
		queue.add([file('a.csv')]);
		way('a.csv').oncut();
		expect(queue.rows[0].phase).toBe('cut');
		way('a.csv').onprogress(1);
		expect(queue.rows[0].phase).toBe('sending');
	});

	it('goes on with the next file when one is refused, and sends again what did not arrive', () => {
		const { log, queue, way } = door();
		queue.add([file('a.csv'), file('b.csv')]);
		way('a.csv').onfault(LINE_BROKEN);
		expect(log).toEqual(['start a.csv', 'start b.csv']);
		expect(queue.rows[0]).toMatchObject({ phase: 'failed', problem: { again: true } });
		way('b.csv').onarrived({ id: 'b', knownBefore: false });
		queue.retry(queue.rows[0]);
		expect(log.at(-1)).toBe('start a.csv');
		expect(queue.rows[0].problem).toBeNull();
	});

	it('gives up what is on its way, takes it off the list and out of the browser', async () => {
		const { log, queue, kept } = door();
		queue.add([file('a.csv'), file('b.csv')]);
		await settle();
		expect([...kept.keys()]).toEqual(['a.csv', 'b.csv']);
		await queue.cancel(queue.rows[0]);
		await settle();
		expect(log).toEqual(['start a.csv', 'give up a.csv', 'start b.csv']);
		expect(queue.rows.map(({ name }) => name)).toEqual(['b.csv']);
		expect([...kept.keys()]).toEqual(['b.csv']);
	});

	it('takes up after a reload what the browser kept, and drops it when it has arrived', async () => {
		const { log, queue, kept, way } = door();
		kept.set('a.csv', file('a.csv'));
		await queue.begin();
		expect(log).toEqual(['start a.csv']);
		way('a.csv').onarrived({ id: 'a', knownBefore: false });
		await settle();
		expect(kept.size).toBe(0);
	});

	it('does not send a file twice that is on its way, and goes on with it when it was paused', async () => {
		const { queue } = door();
		queue.add([file('a.csv')]);
		queue.add([file('a.csv')]);
		expect(queue.rows).toHaveLength(1);
		await queue.pause(queue.rows[0]);
		queue.add([file('a.csv')]);
		expect(queue.rows).toHaveLength(1);
		expect(queue.rows[0].phase).toBe('sending');
	});

	it('shows what another tab sends, and makes one row of it and a file that goes on here', async () => {
		const { queue, way, say } = door();
		await queue.begin();
		say(head('a', { state: 'receiving', receivedBytes: 1 }));
		expect(queue.rows[0]).toMatchObject({ phase: 'elsewhere', sentBytes: 1, name: 'a' });
		queue.add([file('a.csv')]);
		way('a.csv').oncreated('a');
		expect(queue.rows.map(({ name }) => name)).toEqual(['a.csv']);
	});

	it('shows one row for a file that the browser kept and the server has begun to receive', async () => {
		const { kept, queue, say, way } = door();
		kept.set('a.csv', file('a.csv'));
		await queue.begin();
		say(head('a', { fileName: 'a.csv', state: 'receiving', receivedBytes: 1 }));
		expect(queue.rows).toHaveLength(1);
		way('a.csv').oncreated('a');
		say(head('a', { fileName: 'a.csv', state: 'receiving', receivedBytes: 2 }));
		expect(queue.rows).toHaveLength(1);
		expect(queue.rows[0].phase).toBe('sending');
	});

	it('links the earlier upload where the same file was here before', async () => {
		const { queue, way } = door({ ask: async (id) => head(id, { state: 'analysed' }) });
		queue.add([file('a.csv')]);
		way('a.csv').oncreated('new');
		way('a.csv').onarrived({ id: 'old', knownBefore: true });
		await settle();
		expect(queue.rows[0]).toMatchObject({ id: 'old', knownBefore: true, isDone: true });
	});

	it('asks again when the line to the server stands again, and keeps what a lost question was about', async () => {
		let times = 0;
		const { queue, way, reopen } = door({
			ask: async (id) => {
				if (++times === 1) throw new UploadFault(LINE_BROKEN);
				return head(id, { state: 'refused' });
			}
		});
		await queue.begin();
		queue.add([file('a.csv')]);
		way('a.csv').onarrived({ id: 'a', knownBefore: false });
		await settle();
		expect(queue.rows[0].phase).toBe('arrived');
		reopen();
		await settle();
		expect(queue.rows[0].head?.state).toBe('refused');
	});

	it('takes an upload away and puts it back in its place', async () => {
		const { log, queue, way, say } = door();
		await queue.begin();
		queue.add([file('a.csv'), file('b.csv')]);
		way('a.csv').onarrived({ id: 'a', knownBefore: false });
		const undo = await queue.remove(queue.rows[0]);
		expect(log).toContain('delete a');
		expect(queue.rows.map(({ name }) => name)).toEqual(['b.csv']);
		say(head('a', { state: 'analysed' }));
		await undo?.();
		expect(queue.rows.map(({ name }) => name)).toEqual(['a.csv', 'b.csv']);
	});

	it('takes off the list what was deleted elsewhere', async () => {
		const { queue, say, gone } = door();
		await queue.begin();
		say(head('a', { state: 'reading' }));
		gone('a');
		expect(queue.rows).toHaveLength(0);
	});

	it('tells a page about its upload, until the page goes', async () => {
		const { queue, say } = door();
		await queue.begin();
		const heard: string[] = [];
		const stop = queue.listen('a', ({ stage }) => heard.push(stage));
		say(head('a', { stage: 'laps' }));
		say(head('b', { stage: 'corners' }));
		stop();
		say(head('a', { stage: 'done' }));
		expect(heard).toEqual(['laps']);
	});

	it('stops with its tab', async () => {
		const { log, queue, isListening } = door();
		await queue.begin();
		queue.add([file('a.csv'), file('b.csv')]);
		queue.stop();
		expect(log).toEqual(['start a.csv', 'pause a.csv']);
		expect(isListening()).toBe(false);
	});
});
