import type { Corner, Evidence, LedgerRow } from '../../schemas/analysisDocument.ts';
import { differenceOf, type MetricsPair } from './difference.ts';
import type { Cause } from './causes.ts';

/** Time found in the first corners of a chain, and lost out of the last one, from which a chain is judged as one. */
const LEAST_FOUND_S = 0.02;

/** A linked chain as one: what its first corners found or lost, and what came of it out of the last one. */
export interface ChainAccount {
	corners: number[];
	/** Δ of the rows before the last corner's exit; negative is found */
	beforeS: number;
	/** Δ of the last corner's exit with the straight behind it */
	exitS: number;
}

/** Chains of linked corners, each as the numbers of its corners in driving order. */
export function linkedChains(corners: readonly Corner[]): number[][] {
	const chains: number[][] = [];
	for (const { number, linkedTo } of corners) {
		if (number === null) continue;
		const open = chains.at(-1);
		if (!open || open.at(-1) !== number) chains.push([number]);
		if (linkedTo !== null && linkedTo > number) chains.at(-1)?.push(linkedTo);
	}
	return chains.filter((chain) => chain.length > 1);
}

/** The time ledger of each linked chain: what was given up for the exit of its last corner. */
export function judgeChains(corners: readonly Corner[], ledger: readonly LedgerRow[]): ChainAccount[] {
	return linkedChains(corners).flatMap((chain) => {
		const rows = chain.map((number) => ledger.find(({ corner }) => corner === number));
		const last = rows.at(-1);
		if (!last || rows.some((row) => !row)) return [];
		const beforeS = rows.reduce((sum, row) => sum + (row?.totalS ?? 0), 0) - last.exitS;
		return [{ corners: chain, beforeS, exitS: last.exitS }];
	});
}

/**
 * The first corners of a chain were taken too fast for its exit: what was found in them is lost, and more, out of the last one.
 *
 * @param pair metrics of the last corner
 * @returns a cause of the last corner, without a cost of its own; null where the chain says nothing of the kind
 */
export function chainCause({ beforeS, exitS, corners }: ChainAccount, pair: MetricsPair): Cause | null {
	const exit = differenceOf(pair, 'exitKmh');
	if (!exit?.counts || !(exit.by < 0)) return null;
	if (!(beforeS < -LEAST_FOUND_S && exitS > LEAST_FOUND_S && exitS > -beforeS)) return null;
	const value = (quantity: string, driver: number): Evidence => ({
		quantity,
		unit: 's',
		driver,
		reference: null,
		atM: null,
		plusMinus: null
	});
	return {
		code: 'chain_exit_low',
		field: 'exitKmh',
		evidence: [
			value('chainFound', -beforeS),
			value('chainLost', exitS),
			{ quantity: 'fromCorner', unit: '', driver: corners[0], reference: null, atM: null, plusMinus: null }
		]
	};
}
