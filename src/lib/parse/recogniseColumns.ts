import type { Channel } from '../schemas/channels.ts';
import { readUnit } from './columnUnits.ts';
import type { Unit } from './columnUnits.ts';
import { RULES } from './columnRules.ts';
import type { Rule } from './columnRules.ts';
import { readHeaderText } from './headerText.ts';
import { readHeaderWords } from './columnWords.ts';
import type { Concept } from './columnWords.ts';

/** Columns that only help to read others. */
export type HelperColumn = 'latitudeHemisphere' | 'longitudeHemisphere';

export interface Recognition {
	channel: Channel | HelperColumn | null;
	/** unit declared in header or unit row that fits the channel; null: none */
	unit: Unit | null;
	/** 0–1 */
	confidence: number;
}

/** Under this a reading is a guess that would mislead; the person maps the column by hand. */
const LEAST_CONFIDENCE = 0.45;

/**
 * Recognises one column by its name and unit; values are looked at later.
 *
 * A unit of another dimension rules a reading out ("brake (°C)"); foreign words lower the confidence; words that name
 * another quantity rule every reading out.
 *
 * @param unitRowText the cell below the header where the file has a row of units
 */
export function recogniseColumn(header: string, unitRowText = ''): Recognition {
	const { words, units: inHeader } = readHeaderText(header);
	const declared = [...inHeader, ...readUnit(unitRowText)];
	const hemisphere = hemisphereColumn(header);
	if (hemisphere) return { channel: hemisphere, unit: null, confidence: 0.9 };
	const { parts, unknown } = readHeaderWords(words);
	const nothing: Recognition = { channel: null, unit: declared[0] ?? null, confidence: 0 };
	if (parts.some((part) => part.has('other') && part.size === 1)) return nothing;
	let best = nothing;
	for (const rule of RULES) {
		const confidence = confidenceOf(rule, parts, unknown);
		if (confidence === 0) continue;
		const unit = declared.find(({ dimension }) => rule.dimensions.includes(dimension)) ?? null;
		if (declared.length > 0 && !unit && declared.some(({ dimension }) => dimension !== 'count')) continue;
		const weighed = confidence * (unit ? 1 : 0.95);
		if (weighed > best.confidence + 1e-9) best = { channel: rule.channel, unit, confidence: weighed };
	}
	if (best.channel === null && parts.length === 0) {
		// A header that is only a unit says what it is for the quantities of which a run has one.
		const unit = readUnit(header)[0];
		if (unit?.dimension === 'speed') return { channel: 'speed', unit, confidence: 0.6 };
		if (unit?.id === '1/min') return { channel: 'engineSpeed', unit, confidence: 0.6 };
	}
	return best.confidence >= LEAST_CONFIDENCE ? best : { ...nothing, confidence: best.confidence };
}

/** How well the parts of a header meet a rule: 0 where they do not, else the share of its words that belong to the rule. */
function confidenceOf(rule: Rule, parts: readonly ReadonlySet<Concept>[], unknown: number): number {
	const belongs = (part: ReadonlySet<Concept>, concepts: readonly Concept[]) =>
		concepts.some((concept) => part.has(concept));
	if (!rule.needs.every((group) => parts.some((part) => belongs(part, group)))) return 0;
	const own = [...rule.needs.flat(), ...(rule.fits ?? [])];
	let foreign = unknown;
	for (const part of parts) {
		if (belongs(part, own)) continue;
		if (rule.without && belongs(part, rule.without)) return 0;
		if (!part.has('neutral')) foreign += 0.5;
	}
	return ((rule.confidence ?? 1) * parts.length) / (parts.length + foreign);
}

function hemisphereColumn(header: string): HelperColumn | null {
	const name = header
		.trim()
		.toLowerCase()
		.replace(/[\s_/()-]+/g, ' ')
		.trim();
	if (
		/^(?:lat(?:itude)? )?(?:n s|ns)(?: indicator| hemisphere)?$|^lat(?:itude)? (?:hemisphere|dir|direction|ref)$/.test(
			name
		)
	)
		return 'latitudeHemisphere';
	if (
		/^(?:lon(?:gitude)?g? )?(?:e w|ew)(?: indicator| hemisphere)?$|^lon(?:gitude)?g? (?:hemisphere|dir|direction|ref)$/.test(
			name
		)
	)
		return 'longitudeHemisphere';
	return null;
}
