import { figureOf } from '../format/count.ts';
import { formatNumber } from '../format/number.ts';
import { NO_BREAK_SPACE } from '../format/signs.ts';
import { formatSize } from '../format/size.ts';
import type { SourceSummary } from '../schemas/analysisDocument.ts';

const DELIMITER_TEXT: Record<string, string> = {
	',': 'comma',
	';': 'semicolon',
	'\t': 'tab',
	'|': 'vertical bar',
	' ': 'space'
};

/** How a file is written, in one line: "18.4 MB, 92 210 rows, 100 a second · comma, decimal point · names in row 14". */
export function describeSource(source: SourceSummary, sizeBytes: number) {
	const rate = `${formatNumber(source.sampleRateHz, { decimals: source.sampleRateHz < 10 ? 1 : 0 })}${NO_BREAK_SPACE}a${NO_BREAK_SPACE}second`;
	const size = [formatSize(sizeBytes), figureOf(source.rows, 'row'), rate].join(', ');
	const written = `${DELIMITER_TEXT[source.delimiter] ?? source.delimiter}, decimal ${source.decimal === '.' ? 'point' : 'comma'}`;
	const names = source.headerRow === null ? 'no row of names' : `names in row${NO_BREAK_SPACE}${source.headerRow}`;
	return [size, written, names].join(' · ');
}
