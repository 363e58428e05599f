import type { Evidence, Finding } from '../../schemas/analysisDocument.ts';
import { digitsFor, withUnit } from './format.ts';
import { SENTENCES } from './sentences.ts';
import type { Said, TextPart } from './textPart.ts';

export type { TextPart };

const plain = (text: string): TextPart => ({ text, isReference: false });

function say(evidence: Evidence): Said {
	const { quantity, unit, driver, reference, atM } = evidence;
	const digits = digitsFor(unit, driver, reference);
	const isPlace = unit === 'm' && quantity !== 'offset';
	const value = (x: number | null) => (x === null ? '' : isPlace ? placeText(x, digits) : withUnit(x, unit, digits));
	return {
		driver: plain(value(driver)),
		reference: { text: value(reference), isReference: true },
		by: driver === null || reference === null ? '' : withUnit(Math.abs(driver - reference), unit, digits),
		hasReference: reference !== null,
		hasDriver: driver !== null,
		at: atM === null ? '' : placeText(atM, 0)
	};
}

/** A corner that the line cuts has places before it: they count back from there, for nobody says "at minus three". */
function placeText(placeM: number, digits: number): string {
	return placeM < 0 ? `${withUnit(-placeM, 'm', digits)} before the line` : withUnit(placeM, 'm', digits);
}

/**
 * A finding as a sentence in pieces: what was measured, at which place, against which value of the reference. It names no
 * remedy: a coach does. Minus is U+2212, units follow a no-break space.
 */
export function findingParts(finding: Pick<Finding, 'code' | 'evidence'>): TextPart[] {
	const { code, evidence } = finding;
	if (evidence.length === 0) return [];
	const find = (quantity: string): Said | null => {
		const found = evidence.find((piece) => piece.quantity === quantity);
		return found ? say(found) : null;
	};
	const parts: TextPart[] = [];
	for (const words of SENTENCES[code](find, say(evidence[0]))) {
		const part = typeof words === 'string' ? plain(words) : words;
		if (!part.text) continue;
		const last = parts.at(-1);
		if (last && !last.isReference && !part.isReference) last.text += part.text;
		else parts.push({ ...part });
	}
	return parts;
}

/** The same sentence as one string. */
export function findingText(finding: Pick<Finding, 'code' | 'evidence'>): string {
	return findingParts(finding)
		.map((part) => part.text)
		.join('');
}
