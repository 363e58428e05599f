import { readUnit } from './columnUnits.ts';
import type { Unit } from './columnUnits.ts';

export interface HeaderText {
	/** lower-case words without accents, one space between */
	words: string;
	/** meanings of the unit in the header; empty where there is none */
	units: readonly Unit[];
}

const BRACKETED = /\s*[([{<]\s*([^()[\]{}<>]*?)\s*[)\]}>]/g;
const MAX_HEADER = 120;

/**
 * Splits a header into its words and its unit: "Speed (km/h)", "speed [km/h]", "speed_kmh", "speedKmh", "Speed in km/h",
 * "Speed, km/h", "Speed/kmh".
 */
export function readHeaderText(header: string): HeaderText {
	let text = header
		.slice(0, MAX_HEADER)
		.normalize('NFKC')
		.replace(/[\p{Cf}\p{Cc}\p{Extended_Pictographic}]/gu, ' ')
		.replace(/^["'\s]+|["'\s]+$/g, '');
	let units: readonly Unit[] = [];
	text = text.replace(BRACKETED, (whole, inside: string) => {
		const found = readUnit(inside);
		if (found.length > 0 && units.length === 0) {
			units = found;
			return ' ';
		}
		return ` ${inside} `;
	});
	if (units.length === 0) {
		// whole words at the end: "speed in km/h", "Speed km/h", "speed_kmh", "distance, m"
		const tail =
			/^(.*?[^\s_,;:.|-])(?:[\s_,;:.|-]+|\s+in\s+|\s*\/\s*)([^\s_]+(?:\/[^\s_]+)?|(?:m|km)[_ ](?:s|h)2?)$/iu.exec(text);
		const camel = /^(.*[\p{Ll}\d])(Kmh|Kph|Mph|Mps|Mps2|Pct|Deg|Rad|Radps|Degps|Rpm|Bar|Kpa|Psi|Ms|Km)$/u.exec(text);
		for (const match of [tail, camel]) {
			const found = match
				? readUnit(
						match[2]
							.replace(/[_ ]/, '/')
							.replace(/^radps$/i, 'rad/s')
							.replace(/^degps$/i, 'deg/s')
					)
				: [];
			// A lone letter or "no." is a word as often as a unit; a bracket would have said which.
			if (!match || found.length === 0 || /^(?:g|n|h|l|c|f|a|v|k|no\.?|nr\.?|#|-|1|0)$/i.test(match[2])) continue;
			units = found;
			if (!/^rpm$/i.test(match[2])) text = match[1].replace(/\s+in$/i, '');
			break;
		}
	}
	const words = text
		.replace(/([\p{Ll}\d])(\p{Lu})/gu, '$1 $2')
		.replace(/(\p{Lu})(\p{Lu}\p{Ll})/gu, '$1 $2')
		.toLowerCase()
		.normalize('NFD')
		.replace(/[\u0300-\u036f]/g, '')
		.normalize('NFC')
		.replace(/ß/g, 'ss')
		.replace(/ł/g, 'l')
		.replace(/[^\p{L}\p{N}#%°]+/gu, ' ')
		.trim();
	return { words, units };
}
