import { describe, expect, it } from 'vitest';
import type { UploadHead } from '../schemas/views.ts';
import { UploadFault, UploadQueue, type UploadDoor } from './UploadQueue.svelte.ts';

const head = (fileName: string, changes: Partial<UploadHead> = {}): UploadHead => ({
	id: fileName,
	fileName,
	sizeBytes: 3,
	state: 'stored',
	stage: 'waiting',
	progress: 0,
	createdAt: '2026-05-14T18:05:00.000Z',
	error: null,
	runIds: [],
	...changes
});
const file = (name: string) => new File(['a,b'], name);

/** A server that answers at once and is done after the second question. */
function door(changes: Partial<UploadDoor> = {}) {
	const log: string[] = [];
	const asked = new Map<string, number>();
	const answers: UploadDoor = {
		send: async ({ name }, onprogress) => {
			log.push(`send ${name}`);
			onprogress(0.5);
			await Promise.resolve();
			log.push(`sent ${name}`);
			return head(name);
		},
		ask: async (id) => {
			const times = (asked.get(id) ?? 0) + 1;
			asked.set(id, times);
			return head(id, times < 2 ? { state: 'reading', stage: 'laps' } : { state: 'analysed', stage: 'done' });
		},
		...changes
	};
	return { log, asked, queue: new UploadQueue(answers, { askEveryMs: 1 }) };
}

describe('UploadQueue', () => {
	it('sends one file after the other and asks until each is settled', async () => {
		const { log, asked, queue } = door();
		queue.add([file('a.csv'), file('b.csv')]);
		await queue.settled();
		expect(log).toEqual(['send a.csv', 'sent a.csv', 'send b.csv', 'sent b.csv']);
		expect(Object.fromEntries(asked)).toEqual({ 'a.csv': 2, 'b.csv': 2 });
		expect(queue.rows.every((row) => row.isDone && row.sent === 1)).toBe(true);
	});

	it('takes files while others are under way', async () => {
		const { queue } = door();
		queue.add([file('a.csv')]);
		queue.add([file('b.csv')]);
		await queue.settled();
		expect(queue.rows.map((row) => row.head?.state)).toEqual(['analysed', 'analysed']);
	});

	it('goes on with the next file when one is refused at the door', async () => {
		const { queue } = door({
			send: async ({ name }) => {
				if (name === 'big.csv') throw new UploadFault({ message: 'too large', remedy: 'cut it', again: false });
				return head(name, { state: 'analysed' });
			}
		});
		queue.add([file('big.csv'), file('b.csv')]);
		await queue.settled();
		expect(queue.rows[0].problem).toMatchObject({ message: 'too large', again: false });
		expect(queue.rows[1].isDone).toBe(true);
	});

	it('sends again what did not arrive', async () => {
		let tries = 0;
		const { queue } = door({
			send: async ({ name }) => {
				if (++tries === 1) throw new TypeError('network');
				return head(name, { state: 'analysed' });
			}
		});
		queue.add([file('a.csv')]);
		await queue.settled();
		expect(queue.rows[0].problem?.again).toBe(true);
		queue.retry(queue.rows[0]);
		await queue.settled();
		expect(queue.rows[0].problem).toBeNull();
		expect(queue.rows[0].head?.state).toBe('analysed');
	});

	it('keeps asking when one question gets lost', async () => {
		let times = 0;
		const { queue } = door({
			ask: async (id) => {
				if (++times === 1) throw new TypeError('network');
				return head(id, { state: 'refused' });
			}
		});
		queue.add([file('a.csv')]);
		await queue.settled();
		expect(times).toBe(2);
		expect(queue.rows[0].head?.state).toBe('refused');
	});

	it('ends with its page', async () => {
		const { queue, asked } = door({ ask: async (id) => head(id, { state: 'reading' }) });
		queue.add([file('a.csv')]);
		setTimeout(() => queue.stop(), 5);
		await queue.settled();
		expect(asked.size).toBe(0);
		expect(queue.rows[0].isDone).toBe(false);
	});
});
