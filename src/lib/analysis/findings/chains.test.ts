import { describe, expect, it } from 'vitest';
import type { Corner, CornerMetrics, LedgerRow } from '../../schemas/analysisDocument.ts';
import { chainCause, judgeChains, linkedChains } from './chains.ts';

const corner = (number: number, linkedTo: number | null = null) => ({ number, linkedTo }) as Corner;
const CORNERS = [corner(1), corner(2, 3), corner(3, 4), corner(4), corner(5)];

const row = (number: number, entryS: number, midS: number, exitS: number) =>
	({ corner: number, entryS, midS, exitS, totalS: entryS + midS + exitS }) as LedgerRow;
const exits = (driver: number, reference: number) => ({
	driver: { exitKmh: driver, plusMinus: {} } as CornerMetrics,
	reference: { exitKmh: reference, plusMinus: {} } as CornerMetrics,
	apexM: 0,
	lengthM: 1000
});

describe('linked corners judged as one', () => {
	it('takes corners that follow each other linked as one chain', () => {
		expect(linkedChains(CORNERS)).toEqual([[2, 3, 4]]);
		expect(linkedChains([corner(1, 2), corner(2), corner(3, 4), corner(4)])).toEqual([
			[1, 2],
			[3, 4]
		]);
	});

	it('holds what came out of the last one against what the others found', () => {
		const ledger = [row(1, 0, 0, 0), row(2, -0.05, -0.02, 0), row(3, -0.01, 0, 0), row(4, 0.01, 0.02, 0.2)];
		const [chain] = judgeChains(CORNERS, ledger);
		expect(chain.corners).toEqual([2, 3, 4]);
		expect(chain.beforeS).toBeCloseTo(-0.05, 12);
		expect(chain.exitS).toBeCloseTo(0.2, 12);
		expect(chainCause(chain, exits(92, 99))).toMatchObject({ code: 'chain_exit_low', field: 'exitKmh' });
	});

	it.each([
		{ name: 'the exit is as fast', chain: { beforeS: -0.05, exitS: 0.2 }, driver: 98.8 },
		{ name: 'nothing was found before', chain: { beforeS: 0.05, exitS: 0.2 }, driver: 92 },
		{ name: 'more was found than lost', chain: { beforeS: -0.3, exitS: 0.2 }, driver: 92 }
	])('keeps silent where $name', ({ chain, driver }) => {
		expect(chainCause({ corners: [2, 3], ...chain }, exits(driver, 99))).toBeNull();
	});
});
