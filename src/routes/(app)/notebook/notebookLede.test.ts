import { describe, expect, it } from 'vitest';
import { emptyNotebook, notebook } from '../../(dev)/pages-gallery/examples.ts';
import { notebookLede } from './notebookLede.ts';

describe('notebookLede', () => {
	const [page] = notebook.pages;
	const [last] = notebook.latestRuns;
	const told = (best: { runId: string; timeS: number } | null, runs = 6) => ({
		pages: [{ ...page, runs, bestLap: best && { id: last.id, ...best } }],
		latestRuns: [last]
	});

	it.each([
		{
			name: 'a new best',
			view: notebook,
			expected: 'Your last run brought your best lap at Vallmere Park, grand prix: 1:38.104.'
		},
		{
			name: 'a first run',
			view: told({ runId: last.id, timeS: 98.104 }, 1),
			expected: 'Your first run at Vallmere Park, grand prix: best lap 1:38.104.'
		},
		{
			name: 'a run that stayed short',
			view: told({ runId: page.lastRunId.replace('2', '1'), timeS: 97.804 }),
			expected: 'Your last run at Vallmere Park, grand prix stayed 0.300\u00a0s short of your best.'
		},
		{
			name: 'a run level with the best',
			view: told({ runId: page.lastRunId.replace('2', '1'), timeS: 98.08 }),
			expected: 'Your last run at Vallmere Park, grand prix was level with your best.'
		},
		{
			name: 'a run without a timed lap',
			view: { pages: [page], latestRuns: [{ ...last, bestLap: null }] },
			expected: 'Your last run at Vallmere Park, grand prix holds no timed lap.'
		},
		{
			name: 'an empty notebook',
			view: emptyNotebook,
			expected: 'No run yet. Add a session, and the first page opens by itself.'
		}
	])('tells of $name', ({ view, expected }) => {
		expect(notebookLede(view)).toBe(expected);
	});
});
