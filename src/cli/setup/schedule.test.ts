import { setTimeout as sleep } from 'node:timers/promises';
import { describe, expect, it } from 'vitest';
import { runTasks, type Task } from './schedule.mjs';

describe('runTasks', () => {
	it('keeps to the number of places and to the order', async () => {
		const trace: string[] = [];
		let most = 0;
		let now = 0;
		const tasks = ['a', 'b', 'c', 'd'].map((name) => ({
			name,
			work: async () => {
				trace.push(name);
				most = Math.max(most, ++now);
				await sleep(5);
				now -= 1;
				return true;
			}
		}));
		const results = await runTasks(tasks, { places: 2, well: (good) => good, onend: () => {} });
		expect(trace).toEqual(['a', 'b', 'c', 'd']);
		expect(most).toBe(2);
		expect([...results.keys()].sort()).toEqual(['a', 'b', 'c', 'd']);
	});

	it('runs what waits for another task after it, and nothing beside what runs alone', async () => {
		const trace: string[] = [];
		const log =
			(name: string, durationMs: number): (() => Promise<boolean>) =>
			async () => {
				trace.push(`${name} begins`);
				await sleep(durationMs);
				trace.push(`${name} ends`);
				return true;
			};
		const tasks: Task<boolean>[] = [
			{ name: 'journeys', after: ['build'], alone: true, work: log('journeys', 5) },
			{ name: 'build', work: log('build', 5) },
			{ name: 'slow', work: log('slow', 30) }
		];
		await runTasks(tasks, { places: 2, well: (good) => good, onend: () => {} });
		expect(trace).toEqual([
			'build begins',
			'slow begins',
			'build ends',
			'slow ends',
			'journeys begins',
			'journeys ends'
		]);
	});

	it('leaves out what waits for a task that failed', async () => {
		const tasks = [
			{ name: 'build', work: async () => false },
			{ name: 'journeys', after: ['build'], work: async () => true }
		];
		const results = await runTasks(tasks, { places: 2, well: (good) => good, onend: () => {} });
		expect([...results]).toEqual([['build', false]]);
	});

	it('does not wait for a task that was not asked for', async () => {
		const tasks = [{ name: 'journeys', after: ['build'], work: async () => true }];
		expect((await runTasks(tasks, { places: 1, well: Boolean, onend: () => {} })).get('journeys')).toBe(true);
	});

	it('lets what runs come to its end before it throws, and begins nothing more', async () => {
		const trace: string[] = [];
		const tasks = [
			{ name: 'broken', work: async () => Promise.reject(new Error('broken')) },
			{ name: 'slow', work: async () => (await sleep(10), trace.push('slow'), true) },
			{ name: 'later', work: async () => (trace.push('later'), true) }
		];
		await expect(runTasks(tasks, { places: 2, well: Boolean, onend: () => {} })).rejects.toThrow('broken');
		expect(trace).toEqual(['slow']);
	});
});
