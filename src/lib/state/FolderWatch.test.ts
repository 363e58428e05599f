import { describe, expect, it } from 'vitest';
import { FolderWatch } from './FolderWatch.svelte.ts';
import type { FolderDoor, FolderMemory, WatchableFolder } from './watchedFolder.ts';

const QUIET_MS = 10_000;

/** A disk with one folder that the test fills, and a clock that it turns. */
function disk({ isSupported = true } = {}) {
	const files = new Map<string, File>();
	const sent: string[] = [];
	let memory: FolderMemory | null = null;
	let nowMs = 0;
	const state = { mayRead: true, isThere: true, claimed: false, answer: true };
	const folder: WatchableFolder = {
		name: 'laps',
		handle: null,
		mayRead: async () => state.mayRead,
		askToRead: async () => (state.mayRead = state.answer),
		list: async () => {
			if (!state.isThere || !state.mayRead) throw new DOMException('gone', 'NotFoundError');
			return [...files].map(([path, file]) => ({ path, file }));
		}
	};
	const door: FolderDoor = {
		isSupported,
		choose: async () => folder,
		recall: async () => memory && { folder, memory },
		remember: async (_, kept) => void (memory = kept),
		forget: async () => void (memory = null),
		claim: async () => {
			if (state.claimed) return null;
			state.claimed = true;
			return () => (state.claimed = false);
		}
	};
	const make = () =>
		new FolderWatch(door, (taken) => void sent.push(...taken.map(({ name }) => name)), {
			lookEveryMs: 3_600_000,
			quietMs: QUIET_MS,
			now: () => nowMs
		});
	return {
		sent,
		state,
		make,
		write: (path: string, text: string) => {
			files.set(path, new File([text], path, { lastModified: nowMs }));
		},
		pass: (ms: number) => (nowMs += ms)
	};
}

describe('FolderWatch', () => {
	it('leaves what is there, and sends a new file once when nobody writes to it any more', async () => {
		const { sent, make, write, pass } = disk();
		write('old.csv', 'a,b');
		const watch = make();
		await watch.choose();
		expect(watch.state).toBe('watching');
		expect(watch.older.map(({ path }) => path)).toEqual(['old.csv']);
		write('new.csv', 'a');
		await watch.look();
		expect(watch.growing).toEqual(['new.csv']);
		pass(QUIET_MS - 1);
		write('new.csv', 'a,b');
		await watch.look();
		pass(QUIET_MS - 1);
		await watch.look();
		expect(sent).toEqual([]);
		pass(1);
		await watch.look();
		await watch.look();
		expect(sent).toEqual(['new.csv']);
		expect(watch.growing).toEqual([]);
		watch.end();
	});

	it('sends what was there before when a person says so', async () => {
		const { sent, make, write } = disk();
		write('old.csv', 'a,b');
		const watch = make();
		await watch.choose();
		await watch.sendOlder();
		expect(sent).toEqual(['old.csv']);
		expect(watch).toMatchObject({ sent: 1, older: [] });
		watch.end();
	});

	it('does not send an empty file, for its writer has only begun', async () => {
		const { sent, make, write, pass } = disk();
		const watch = make();
		await watch.choose();
		write('new.csv', '');
		await watch.look();
		pass(2 * QUIET_MS);
		await watch.look();
		expect(sent).toEqual([]);
		watch.end();
	});

	it('knows after a reload what it sent, and asks for the right to read again', async () => {
		const { sent, state, make, write, pass } = disk();
		const before = make();
		await before.choose();
		write('a.csv', 'a,b');
		await before.look();
		pass(QUIET_MS);
		await before.look();
		before.end();
		state.mayRead = false;
		const after = make();
		await after.begin();
		expect(after).toMatchObject({ state: 'permission', name: 'laps', sent: 1 });
		state.answer = false;
		await after.resume();
		expect(after.state).toBe('permission');
		state.answer = true;
		await after.resume();
		expect(after.state).toBe('watching');
		pass(QUIET_MS);
		await after.look();
		expect(sent).toEqual(['a.csv']);
		after.end();
	});

	it('stays paused through a reload, and sends afterwards what came meanwhile', async () => {
		const { sent, make, write, pass } = disk();
		const before = make();
		await before.choose();
		await before.pause();
		write('a.csv', 'a,b');
		const after = make();
		await after.begin();
		expect(after.state).toBe('paused');
		await after.resume();
		pass(QUIET_MS);
		await after.look();
		expect(sent).toEqual(['a.csv']);
		after.end();
	});

	it('leaves the folder to the tab that watches it', async () => {
		const { make } = disk();
		const first = make();
		await first.choose();
		const second = make();
		await second.begin();
		expect(second.state).toBe('elsewhere');
		first.end();
		await second.resume();
		expect(second.state).toBe('watching');
		second.end();
	});

	it('says that the folder is gone', async () => {
		const { state, make } = disk();
		const watch = make();
		await watch.choose();
		state.isThere = false;
		await watch.look();
		expect(watch.state).toBe('lost');
	});

	it('forgets the folder when a person ends it', async () => {
		const { make } = disk();
		const watch = make();
		await watch.choose();
		await watch.stop();
		expect(watch).toMatchObject({ state: 'off', name: null });
		const after = make();
		await after.begin();
		expect(after.state).toBe('off');
	});

	it('says that this browser cannot', () => {
		expect(disk({ isSupported: false }).make().state).toBe('unsupported');
	});
});
