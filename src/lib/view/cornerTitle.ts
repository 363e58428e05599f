import { formatUnit } from '../format/unit.ts';
import type { CornerView } from '../schemas/views.ts';

/** What stands beside a corner's large number: its name, else what kind of corner it is. */
export function cornerName({ name, direction }: Pick<CornerView, 'name' | 'direction'>): string {
	if (name !== null) return name;
	return direction === null ? 'Corner' : direction === 'right' ? 'Right-hander' : 'Left-hander';
}

/** "Tern Hairpin", or "corner 4": a corner within a sentence. */
export function cornerInWords({ number, name }: Pick<CornerView, 'number' | 'name'>): string {
	return name ?? `corner\u00a0${number ?? ''}`;
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
		corner.name === null ? null : corner.direction,
		corner.angleDeg === null ? null : formatUnit(corner.angleDeg, '°'),
		corner.minRadiusM === null ? null : `R\u00a0${formatUnit(corner.minRadiusM, 'm')}`,
		corner.apex2M === null ? null : 'double apex',
		corner.kind === 'flat' ? 'flat in the reference' : corner.kind === 'lifted' ? 'lifted in the reference' : null,
		next ? `leads on to ${cornerCall(next)}` : null
	]
		.filter((fact) => fact !== null)
		.join(' · ');
}
