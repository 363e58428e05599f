import { readNumber } from '../../parse/readNumber.ts';
import type { TableHeader, TextTable } from '../../parse/readTable.ts';
import type { PedalWarning } from '../../schemas/pedalDocument.ts';

/** One column of a sweep as numbers, with what its full value is. */
export interface SweepColumn {
	header: string;
	/** as the file says: "%", "0..1", "N", "kg", "counts"; empty where it does not */
	unit: string;
	values: Float64Array;
	/** the value of full, where the unit or a digital scale says it; else null */
	full: number | null;
}

export interface Sweep {
	/** a known input: force, weight or travel */
	input: SweepColumn | null;
	output: SweepColumn;
	warnings: PedalWarning[];
}

const TIME = /\b(time|zeit|temps|tiempo|tempo|seconds?|timestamp|clock|sample|index|frame|row|no)\b|^t$|時間/;
const INPUT =
	/\b(force|load|weights?|input|in|kraft|last|gewicht|eingang|effort|applied|pressed|travel|position|angle|weg|poids|charge|entree|fuerza|entrada|forza|ingresso|carico|known|newtons?|kilograms?|load ?cell|mass|masse|kg|x)\b|踏力|荷重/;
const OUTPUT =
	/\b(output|out|brake|brakes|pedal|signal|value|axis|axle|reading|game|sim|bremse|ausgang|bremsdruck|frein|sortie|freno|salida|uscita|pressure|druck|response|result|y|adc|pct|percent)\b|ブレーキ|出力/;
const FORCE_UNIT = /^(n|newton|newtons|kn|dan|kgf|kp|lbf|lbs?|kg|g|mm|deg|°)$/;

/** Full values of digital scales: 8, 10, 12 and 16 bits. */
const DIGITAL_FULL = [255, 1023, 4095, 65535];

/** A sentence is no header. */
const MOST_WORDS = 3;

/** Do these headers name the output of a pedal? */
export function isSweepHeader(headers: readonly TableHeader[]): boolean {
	if (headers.length < 2)
		return headers.some(({ words }) => OUTPUT.test(words) && words.split(' ').length <= MOST_WORDS);
	const named = headers.filter(({ words }) => INPUT.test(words) || OUTPUT.test(words));
	return named.length > 0 && headers.filter(({ text }) => /^[+-]?[\d.,]+$/.test(text)).length < headers.length / 2;
}

/**
 * Finds input and output of a sweep by the words and units of the header, else by their order.
 *
 * @returns null where no column can be the output
 */
export function readSweep(table: TextTable): Sweep | null {
	const warnings: PedalWarning[] = [];
	const columns = table.headers
		.map((header, at) => ({ header, at, unit: unitOf(header), score: scoreOf(header) }))
		.filter(({ header }) => !TIME.test(header.words) && !header.units.some(({ dimension }) => dimension === 'time'))
		.map((column) => ({ ...column, numbers: numbersOf(table, column.at) }))
		.filter(({ numbers }) => numbers.known >= 0.5 * table.rows.length && numbers.known > 0);
	if (columns.length === 0) return null;
	let input = null;
	let output = columns[0];
	if (columns.length > 1) {
		// the one that sounds most like an input, then the one that sounds most like an output; order decides a tie
		const byInput = columns.toSorted((a, b) => b.score - a.score || a.at - b.at);
		input = byInput[0];
		const rest = columns.filter((column) => column !== byInput[0]);
		output = rest.toSorted((a, b) => a.score - b.score || a.at - b.at)[0];
		if (input.score === output.score) warnings.push('columns_assumed');
	} else if (output.score > 0) return null;
	const use = Array.from(table.rows.keys()).filter(
		(i) => Number.isFinite(output.numbers.values[i]) && (!input || Number.isFinite(input.numbers.values[i]))
	);
	if (use.length < table.rows.length) warnings.push('bad_rows');
	const columnOf = (column: (typeof columns)[number]): SweepColumn => {
		const values = Float64Array.from(use, (i) => column.numbers.values[i]);
		return { header: column.header.text, unit: column.unit, values, full: fullOf(column.unit, values) };
	};
	return { input: input && columnOf(input), output: columnOf(output), warnings };
}

/** Positive: an input; negative: an output. */
function scoreOf({ words, text }: TableHeader): number {
	const bracket = /[([]\s*([^)\]]*)/.exec(text)?.[1]?.trim().toLowerCase() ?? '';
	const last = words.split(' ').at(-1) ?? '';
	const force = FORCE_UNIT.test(bracket) || FORCE_UNIT.test(last) ? 2 : 0;
	return (
		force +
		(INPUT.test(words) ? 2 : 0) -
		(OUTPUT.test(words) ? 2 : 0) +
		(/raw force|pedal (force|load|weight|travel|position)|brake (force|load|weight|travel|position)/.test(words)
			? 3
			: 0)
	);
}

function unitOf({ text, words, units }: TableHeader): string {
	if (units.length > 0) return units[0].id;
	if (/%|\b(pct|percent|prozent|pourcent)\b/.test(`${text.toLowerCase()} ${words}`)) return '%';
	if (/\b0\s*(\.\.|-|–|…|to)\s*1\b/.test(text)) return '0..1';
	return '';
}

function numbersOf(table: TextTable, at: number): { values: Float64Array; known: number } {
	let known = 0;
	const values = Float64Array.from(table.rows, ({ cells }) => {
		const value = readNumber(cells[at], table.decimal) ?? NaN;
		if (Number.isFinite(value)) known++;
		return value;
	});
	return { values, known };
}

function fullOf(unit: string, values: Float64Array): number | null {
	const most = values.reduce((largest, value) => Math.max(largest, value), -Infinity);
	if (unit === '%') return 100;
	if (unit === '0..1') return 1;
	if (unit === '‰') return 1000;
	if (unit === '' && most <= 1.0005 && most > 0.05) return 1;
	const whole = values.every((value) => Number.isInteger(value));
	if (whole) return DIGITAL_FULL.find((full) => most === full) ?? null;
	return null;
}
