import type { Comparison, Finding } from '../../schemas/analysisDocument.ts';

/**
 * The smallest set of findings that holds half of the gap: a proposal, the coach decides.
 *
 * Takes the dearest findings first, which makes the set smallest. What the driver does not decide (car, tow or wind, the lap before) is
 * left out. Where all findings together hold less than half of the gap, all of them are returned.
 *
 * @returns findings in order of cost; [] where the driver is not slower
 */
export function shortList(comparison: Pick<Comparison, 'deltaS' | 'findings'>): Finding[] {
	const half = comparison.deltaS / 2;
	const listed: Finding[] = [];
	let heldS = 0;
	const dearest = comparison.findings
		.filter(({ code, costS }) => code !== 'carried_in' && code !== 'car_or_wind' && (costS ?? 0) > 0)
		.sort((a, b) => (b.costS ?? 0) - (a.costS ?? 0));
	for (const finding of dearest) {
		if (!(heldS < half)) break;
		listed.push(finding);
		heldS += finding.costS ?? 0;
	}
	return listed;
}
