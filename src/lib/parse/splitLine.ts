/** Cells beyond this many are not split off: a line of a million delimiters costs no more than a wide table. */
const MAX_CELLS = 4096;

/**
 * Splits one line into cells; a cell that begins with a double quote runs to its closing quote, two quotes stand for one (RFC 4180).
 * For the first lines of a file only: a quoted cell with a line end in it ends with the line.
 *
 * @example splitLine('1,"2,5",3', ',') // => ['1', '2,5', '3']
 */
export function splitLine(line: string, delimiter: string): string[] {
	const cells: string[] = [];
	let at = 0;
	while (cells.length < MAX_CELLS) {
		let start = at;
		while (line[start] === ' ') start++;
		if (line[start] !== '"') {
			const end = line.indexOf(delimiter, at);
			if (end < 0) {
				cells.push(line.slice(at));
				return cells;
			}
			cells.push(line.slice(at, end));
			at = end + 1;
			continue;
		}
		let close = line.indexOf('"', start + 1);
		while (close >= 0 && line[close + 1] === '"') close = line.indexOf('"', close + 2);
		if (close < 0) close = line.length;
		cells.push(line.slice(start + 1, close).replaceAll('""', '"'));
		const next = line.indexOf(delimiter, close);
		if (next < 0) return cells;
		at = next + 1;
	}
	return cells;
}
