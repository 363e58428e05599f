import { describe, expect, it } from 'vitest';
import { page } from 'vitest/browser';
import { render } from 'vitest-browser-svelte';
import LapList from './LapList.svelte';

const lap = (number: number, timeS: number, changes: object = {}) => ({
	id: `lap${number}`,
	number,
	kind: 'timed' as const,
	timeS,
	clean: true,
	reasons: [],
	...changes
});

describe('LapList', () => {
	it('says of each lap what it is, and which is the best', async () => {
		await render(LapList, {
			laps: [
				lap(1, 108.46, { kind: 'out', clean: false, reasons: ['out_lap'] }),
				lap(2, 98.104),
				lap(3, 99.31, { clean: false, reasons: ['off_path'] })
			],
			bestId: 'lap2'
		});
		const rows = page.getByRole('listitem');
		await expect.element(rows.nth(0)).toHaveTextContent('Lap 1 out lap 1:48.5');
		await expect.element(rows.nth(1)).toHaveTextContent('Lap 2 timed, clean, best 1:38.104');
		await expect.element(rows.nth(2)).toHaveTextContent('Lap 3 timed, left the circuit 1:39.310');
	});
});
