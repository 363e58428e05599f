import { formatUnit } from '../format/unit.ts';
import type { CornerView } from '../schemas/views.ts';

/** "Tern Hairpin", or "Corner 4" where nobody has named it. */
export function cornerName(corner: Pick<CornerView, 'number' | 'name'>): string {
	return corner.name ?? `Corner ${corner.number ?? ''}`.trim();
}

/** "4 Tern Hairpin", or "corner 4": how a corner is called in a line of text or a link. */
export function cornerCall(corner: Pick<CornerView, 'number' | 'name'>): string {
	return corner.name === null
		? `corner\u00a0${corner.number ?? ''}`
		: `${corner.number ?? ''}\u00a0${corner.name}`.trim();
}

/** "right · 143° · R 18 m · leads on to 5 Weir": what is known of the shape. */
export function cornerFacts(corner: CornerView, corners: readonly CornerView[]): string {
	const next = corner.linkedTo === null ? undefined : corners.find((other) => other.number === corner.linkedTo);
	return [
		corner.direction,
		corner.angleDeg === null ? null : formatUnit(corner.angleDeg, '°'),
		corner.minRadiusM === null ? null : `R\u00a0${formatUnit(corner.minRadiusM, 'm')}`,
		corner.apex2M === null ? null : 'double apex',
		corner.kind === 'flat' ? 'flat in the reference' : corner.kind === 'lifted' ? 'lifted in the reference' : null,
		next ? `leads on to ${cornerCall(next)}` : null
	]
		.filter((fact) => fact !== null)
		.join(' · ');
}
