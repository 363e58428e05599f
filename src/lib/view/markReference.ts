import { formatNumber } from '../format/number.ts';
import { NO_BREAK_SPACE } from '../format/signs.ts';
import type { Finding } from '../schemas/analysisDocument.ts';

/** A piece of a sentence; what is the reference's is set on a highlighter stroke. */
export interface Segment {
	text: string;
	reference: boolean;
}

const UNIT_AFTER_NUMBER = /(\d) (m|%|km\/h|mph|s|bar|psi|°|g|laps?)(?![\p{L}\p{N}])/gu;

/**
 * Splits a finding's sentence so that the reference's values in it can be marked. The values are looked for as they would be
 * written, in any precision; where one stands twice the last one counts, for a sentence says the driver first. What cannot be
 * found stays plain: the sentence is never changed but for its spaces before units.
 *
 * @example markReference('at 412 m, not 424 m', evidence) // => the piece "424 m" is the reference's
 */
export function markReference(text: string, evidence: Finding['evidence']): Segment[] {
	const set = text.replace(UNIT_AFTER_NUMBER, `$1${NO_BREAK_SPACE}$2`);
	const marks: { from: number; to: number }[] = [];
	for (const { reference, unit } of evidence) {
		if (reference === null) continue;
		const mark = writtenForms(reference, unit)
			.map((form) => ({ form, from: lastWhole(set, form) }))
			.filter(({ from }) => from >= 0)
			.sort((a, b) => b.form.length - a.form.length)[0];
		if (!mark) continue;
		const to = mark.from + mark.form.length;
		if (!marks.some((other) => other.from < to && mark.from < other.to)) marks.push({ from: mark.from, to });
	}
	marks.sort((a, b) => a.from - b.from);
	const segments: Segment[] = [];
	let at = 0;
	for (const { from, to } of marks) {
		if (from > at) segments.push({ text: set.slice(at, from), reference: false });
		segments.push({ text: set.slice(from, to), reference: true });
		at = to;
	}
	if (at < set.length) segments.push({ text: set.slice(at), reference: false });
	return segments;
}

function writtenForms(value: number, unit: string): string[] {
	const forms = new Set<string>();
	for (let decimals = 0; decimals <= 3; decimals++) {
		const grouped = formatNumber(value, { decimals });
		for (const number of [grouped, grouped.replaceAll(NO_BREAK_SPACE, '')]) {
			forms.add(unit === '' ? number : unit === '°' ? number + unit : number + NO_BREAK_SPACE + unit);
		}
	}
	return [...forms];
}

/** Last place of a written value that is not a part of a longer number or word. */
function lastWhole(text: string, form: string): number {
	for (let from = text.lastIndexOf(form); from >= 0; from = from === 0 ? -1 : text.lastIndexOf(form, from - 1)) {
		const before = text[from - 1] ?? ' ';
		const after = text[from + form.length] ?? ' ';
		const joined = /[\d.,\u2212-]/.test(before) || /[\p{L}\p{N}]/u.test(after);
		const grouped = before === NO_BREAK_SPACE && /\d/.test(text[from - 2] ?? '');
		if (!joined && !grouped) return from;
	}
	return -1;
}
