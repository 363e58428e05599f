import type { Finding } from '../../schemas/analysisDocument.ts';

/**
 * Does a finding's cost belong in sums? `carried_in` of a corner repeats what another finding is charged with already; in the run-up
 * (corner 0) it is a cost of its own, brought along from the lap before.
 */
export function countsOnce(finding: Pick<Finding, 'code' | 'corner'>): boolean {
	return finding.code !== 'carried_in' || finding.corner === 0;
}
