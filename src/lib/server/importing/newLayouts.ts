import type { Knex } from 'knex';
import type { Viewer } from '../access/viewer.ts';
import { fingerprintOf } from './analyseFile.ts';
import { findCandidates } from './findCandidates.ts';
import type { AnalysedRun } from './importMessages.ts';
import { matchesLayout } from './matchLayout.ts';

/** While a run was analysed, another file made the layout that it was driven on. */
export class LayoutAppeared extends Error {
	constructor() {
		super('the layout of a run was made by another file meanwhile');
		this.name = 'LayoutAppeared';
	}
}

/**
 * Lets one transaction at a time make layouts, until its end. Must be its first statement: what it reads afterwards then holds what
 * the one before it has made.
 */
export async function lockLayouts(trx: Knex.Transaction): Promise<void> {
	await trx.raw(
		`INSERT INTO locks (name, holder, expires_at) VALUES ('new layouts', '', CURRENT_TIMESTAMP(3))
		ON DUPLICATE KEY UPDATE expires_at = CURRENT_TIMESTAMP(3)`
	);
}

/** Would storing the runs make a layout. */
export function makesLayouts(runs: readonly AnalysedRun[]): boolean {
	return runs.some(({ layout }) => 'path' in layout);
}

/**
 * Makes sure that a layout which is about to be made is still unknown. `lockLayouts` holds.
 *
 * @param offered layouts that the analysis has looked at, and found to be others
 * @throws {LayoutAppeared}
 */
export async function checkStillNew(
	trx: Knex.Transaction,
	owner: Viewer,
	uploadId: number,
	runs: readonly AnalysedRun[],
	offered: ReadonlySet<number>
): Promise<void> {
	for (const { layout } of runs) {
		if (!('path' in layout)) continue;
		const candidates = await findCandidates(trx, owner, fingerprintOf(layout.path), uploadId);
		const appeared = candidates.some(
			({ layoutId, path }) => !offered.has(layoutId) && matchesLayout(layout.path, path)
		);
		if (appeared) throw new LayoutAppeared();
	}
}
