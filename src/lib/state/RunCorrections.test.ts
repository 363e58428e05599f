import { describe, expect, it } from 'vitest';
import { RunCorrections, type RunFields } from './RunCorrections.svelte.ts';

const runs = ['a', 'b', 'c'].map((id) => ({ id, startedAt: null, layout: 'gp', car: null }));

function corrections({ refuses }: { refuses?: string } = {}) {
	const saved: [string, Partial<RunFields>][] = [];
	const table = new RunCorrections(
		runs,
		async (id, change) => {
			if (id === refuses) throw new Error('not yours');
			saved.push([id, change]);
		},
		(error) => String(error)
	);
	return { saved, table };
}

describe('RunCorrections', () => {
	it('keeps each change at once', async () => {
		const { saved, table } = corrections();
		await table.set(['a'], 'car', 'Brindle GT');
		expect(saved).toEqual([['a', { car: 'Brindle GT' }]]);
		expect(table.valueOf('a').car).toBe('Brindle GT');
		expect(table.stateOf('a')).toEqual({ kind: 'saved' });
	});

	it('does nothing where nothing changes', async () => {
		const { saved, table } = corrections();
		await table.set(['a'], 'layout', 'gp');
		expect(saved).toEqual([]);
		expect(table.mayUndo).toBe(false);
	});

	it('fills many rows as one step, and takes it back as one', async () => {
		const { saved, table } = corrections();
		await table.set(['a', 'b', 'c'], 'layout', 'short');
		await table.set(['b'], 'car', 'Lark');
		await table.undo();
		expect(table.valueOf('b')).toMatchObject({ car: null, layout: 'short' });
		await table.undo();
		expect(['a', 'b', 'c'].map((id) => table.valueOf(id).layout)).toEqual(['gp', 'gp', 'gp']);
		expect(saved.slice(-3)).toEqual([
			['a', { layout: 'gp' }],
			['b', { layout: 'gp' }],
			['c', { layout: 'gp' }]
		]);
		expect(table.mayUndo).toBe(false);
	});

	it('puts back what could not be kept, says why, and undoes only the rest', async () => {
		const { table } = corrections({ refuses: 'b' });
		await table.set(['a', 'b'], 'car', 'Lark');
		expect(table.valueOf('b').car).toBeNull();
		expect(table.stateOf('b')).toEqual({ kind: 'failed', message: 'Error: not yours' });
		await table.undo();
		expect(table.valueOf('a').car).toBeNull();
	});
});
