import { countOf } from '../format/count.ts';
import { formatNumber } from '../format/number.ts';
import { formatUnit } from '../format/unit.ts';
import type { Comparison } from '../schemas/analysisDocument.ts';

const ORDINALS = ['', 'second ', 'third ', 'fourth ', 'fifth '];

/** A corner that gives or takes less than this is as quick as the reference's. */
export const LEVEL_S = 0.0005;

/**
 * Where a corner stands among the others, in words: "the most expensive of 12 corners: 0.312 of 1.284 s". A share of the gap is
 * only said where the gap itself is lost and larger than the corner.
 */
export function rankText(comparison: Comparison, corner: number): string {
	const rows = comparison.ledger.filter((row) => row.corner > 0);
	const own = rows.find((row) => row.corner === corner)?.totalS ?? 0;
	const of = `of ${countOf(rows.length, 'corner')}`;
	if (Math.abs(own) < LEVEL_S) return 'as quick as the reference here';
	const side = own > 0 ? 1 : -1;
	const rank = rows.filter((row) => row.totalS * side > own * side).length;
	const kind = own > 0 ? 'most expensive' : 'best';
	if (rank >= ORDINALS.length) return own > 0 ? `one of the smaller losses ${of}` : `one of the smaller gains ${of}`;
	const share =
		comparison.deltaS > own && own > 0
			? `: ${formatNumber(own, { decimals: 3 })} of ${formatUnit(comparison.deltaS, 's', { decimals: 3 })}`
			: '';
	return `the ${ORDINALS[rank]}${kind} ${of}${share}`;
}
