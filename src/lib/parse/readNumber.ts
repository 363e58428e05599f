import { readUnit } from './columnUnits.ts';

/** Ways to write "no value" that are not a fault of the file. */
const MISSING =
	/^(?:nan|na|n\/a|n\.a\.|#n\/a|#div\/0!|#value!|null|nil|none|undefined|inf|-inf|infinity|-infinity|-|--|---|\?|\*|\.|_)?$/i;
const PLAIN = /^[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[e][+-]?\d+)?$/i;
/** Spaces between digits, of any width (U+00A0, U+2009, U+202F …), and the apostrophe of Swiss figures. */
const GROUP_SPACE = /(?<=\d)[ \u00a0\u2000-\u200a\u202f'’](?=\d{3}(?:\D|$))/g;
/** Longer text is no number that anybody wrote; it bounds what the patterns below have to go through. */
const MAX_NUMBER = 100;
const MINUS = /[\u2212\u2012\u2013\ufe63\uff0d]/g;
const TRAILING_UNIT = /(?<=\d) *(%|°|[a-zµ][a-zµ²0-9/.·]*)$/i;

const WORDS = new Map<string, number>([
	['on', 1],
	['true', 1],
	['yes', 1],
	['ja', 1],
	['an', 1],
	['off', 0],
	['false', 0],
	['no', 0],
	['nein', 0],
	['aus', 0]
]);

/**
 * Reads one cell as a person would have meant it: unit suffixes, group separators, decimal comma, typographic minus,
 * scientific notation, full-width digits, on/off words. The slow sibling of the byte scanner; both agree on every plain number.
 *
 * @param text the cell, quotes taken off
 * @param decimal decimal sign of the file; decides only where a cell alone is ambiguous ("1,234")
 * @returns the number; NaN where the cell says that there is no value; undefined where it cannot be read
 * @example readNumber('12 704,56', ',') // => 12704.56
 */
export function readNumber(text: string, decimal: '.' | ','): number | undefined {
	let cell = text.trim();
	if (decimal === '.' && PLAIN.test(cell)) return finite(cell);
	if (cell.length > MAX_NUMBER) return undefined;
	if (MISSING.test(cell)) return NaN;
	if (!isAscii(cell))
		cell = cell.replace(MINUS, '-').replace(GROUP_SPACE, '').normalize('NFKC').replace(MINUS, '-').trim();
	cell = cell
		.replace(/^'(.*)'$/, '$1')
		.trim()
		.replace(GROUP_SPACE, '');
	cell = withPoint(cell, decimal);
	if (PLAIN.test(cell)) return finite(cell);
	const unit = TRAILING_UNIT.exec(cell);
	const bare = unit && readUnit(unit[1]).length > 0 ? cell.slice(0, unit.index) : cell;
	if (PLAIN.test(bare)) return finite(bare);
	const grouped = withPoint(bare, decimal);
	if (PLAIN.test(grouped)) return finite(grouped);
	if (MISSING.test(cell)) return NaN;
	return WORDS.get(cell.toLowerCase());
}

/** Beyond the largest double there is no value. */
function finite(cell: string): number {
	const value = Number(cell);
	return Number.isFinite(value) ? value : NaN;
}

function isAscii(text: string): boolean {
	for (let i = 0; i < text.length; i++) if (text.charCodeAt(i) > 127) return false;
	return true;
}

/** The same figure with a point as decimal sign and no group separators. */
function withPoint(cell: string, decimal: '.' | ','): string {
	const comma = cell.lastIndexOf(',');
	const point = cell.lastIndexOf('.');
	if (comma < 0 && (point < 0 || decimal === '.')) return cell;
	if (comma >= 0 && point >= 0) {
		return comma > point ? cell.replaceAll('.', '').replace(',', '.') : cell.replaceAll(',', '');
	}
	if (comma >= 0) {
		const grouped = /^[+-]?[1-9]\d{0,2}(?:,\d{3})+$/.test(cell);
		const several = comma !== cell.indexOf(',');
		if (grouped && (decimal === '.' || several)) return cell.replaceAll(',', '');
		return several ? cell : cell.replace(',', '.');
	}
	// A point in a file with decimal commas: a group separator where it looks like one.
	return /^[+-]?[1-9]\d{0,2}(?:\.\d{3})+$/.test(cell) ? cell.replaceAll('.', '') : cell;
}
