import { readNumber } from '../../parse/readNumber.ts';
import { readTable, type TableHeader } from '../../parse/readTable.ts';
import { readClock } from '../../parse/readTime.ts';
import type { StintLapReason, StintWarning } from '../../schemas/stintDocument.ts';
import type { RawStintLap } from './chooseLaps.ts';

export interface LapList {
	laps: RawStintLap[];
	warnings: StintWarning[];
}

const LAP =
	/^(lap|laps|lap ?(no|nr|number|num|#|count)|no|nr|n|#|number|runde|rundennummer|runden ?nr|tour|tours|vuelta|giro|volta|ronde|rnd|round|ラップ|周回|周)$/;
const LAP_TIME =
	/^(lap ?times?|time|times|laptime|lap ?duration|duration|rundenzeit|zeit|temps|temps (au|par|de) tour|tiempo|tiempo (de|por) vuelta|tempo|tempo (di|sul) giro|rondetijd|tijd|last ?lap|last lap ?time|ラップタイム|タイム)$/;
const REMARK =
	/^(flags?|remarks?|notes?|comments?|status|state|type|kind|lap ?type|tags?|marks?|info|bemerkung(en)?|kommentar|art|remarques?|commentaires?|statut|observaciones|nota|notas|estado|tipo|note|opmerking(en)?|pit|pits|in ?out|track ?status|valid|validity|備考)$/;
const STINT = /^(stint|stint ?(no|nr|number)|tyre ?set|tire ?set|set|relais|run)$/;
/** Channels that a recording has and a list of laps has not. */
const TRACE =
	/\b(speed|geschwindigkeit|vitesse|throttle|gas|brake|bremse|rpm|latitude|lat|longitude|lon|long|gear|steering|distance|acc|accel)\b/;

const MARKS: readonly (readonly [StintLapReason, RegExp])[] = [
	[
		'out_lap',
		/\b(out|out ?lap|outlap|pit ?out|pit ?exit|aus der box|outrunde|sortie|start|standing|formation|install(ation)?)\b/
	],
	['in_lap', /\b(in|in ?lap|inlap|pit ?in|box|pit|pits|pit ?stop|pit ?entry|inrunde|entree|retour)\b/],
	[
		'neutralised',
		/\b(sc|vsc|fcy|safety|safety ?car|yellow|gelb|slow ?(zone|phase)|neutrali[sz](ed|ation)|caution|red|red ?flag|code ?60|full ?course)\b/
	],
	[
		'marked',
		/\b(traffic|verkehr|trafic|invalid|deleted|cut|off|spin|mistake|error|ungültig|ungueltig|aborted|slow|slow ?lap|cool ?down|cool|warm ?up|no|false|nein|dnf|incident|blocked|yellow)\b/
	]
];

/** Do these headers belong to a list of lap times? */
export function isLapListHeader(headers: readonly TableHeader[]): boolean {
	const time = headers.some(({ words }) => LAP_TIME.test(words));
	return time && !headers.some(({ words }) => TRACE.test(words) && !/\b(max|top|avg|average|mean)\b/.test(words));
}

/**
 * Reads a list of lap times: a row per lap with its number, its time in seconds or as m:ss.sss, and what else was noted.
 *
 * @returns null where the file is no such list: a recording, or a table of something else
 * @throws {KerbnoteError} where it is no text at all
 */
export function readLapList(bytes: Uint8Array): LapList | null {
	const table = readTable(bytes, isLapListHeader);
	const at = (pattern: RegExp) => table.headers.findIndex(({ words }) => pattern.test(words));
	const timeAt = bestTime(table.headers);
	const lapAt = at(LAP);
	const stintAt = at(STINT);
	const remarkAt = table.headers.flatMap(({ words }, column) => (REMARK.test(words) ? [column] : []));
	const toS = table.headers[timeAt].units[0]?.dimension === 'time' ? table.headers[timeAt].units[0].factor : 1;
	const warnings: StintWarning[] = [];
	const rows: { lap: RawStintLap; stint: string }[] = [];
	for (const row of table.rows) {
		const number = lapAt < 0 ? rows.length + 1 : readNumber(row.cells[lapAt], table.decimal);
		const timeS = timeOf(row.cells[timeAt], table.decimal, toS);
		if (number === undefined || !Number.isInteger(number)) {
			// a line of totals, or a second header
			if (!warnings.includes('bad_rows')) warnings.push('bad_rows');
			continue;
		}
		const marked = markOf(remarkAt.map((column) => [table.headers[column].words, row.cells[column]] as const));
		rows.push({ lap: { number, timeS, marked }, stint: stintAt < 0 ? '' : row.cells[stintAt] });
	}
	if (lapAt < 0) warnings.push('lap_numbers_missing');
	if (!isList(rows.map(({ lap }) => lap))) return null;
	return { laps: longestStint(rows, warnings), warnings };
}

/** "lap time" before a bare "time", which may be the clock. */
function bestTime(headers: readonly TableHeader[]): number {
	const named = headers.findIndex(
		({ words }) => LAP_TIME.test(words) && /lap|runde|tour|vuelta|giro|ronde|ラップ/.test(words)
	);
	return named >= 0 ? named : headers.findIndex(({ words }) => LAP_TIME.test(words));
}

/** A recording repeats its lap's number or counts time on; a list has one row for each lap. */
function isList(laps: readonly RawStintLap[]): boolean {
	if (laps.length === 0) return false;
	const distinct = new Set(laps.map((lap) => lap.number)).size;
	const likely = laps.filter(({ timeS }) => timeS >= 10 && timeS < 3600).length;
	return distinct === laps.length && likely >= 0.5 * laps.length;
}

function timeOf(cell: string, decimal: '.' | ',', toS: number): number {
	const plain = cell.includes(':') ? undefined : readNumber(cell, decimal);
	return plain === undefined ? (readClock(cell) ?? NaN) : plain * toS;
}

/** What a row says of its lap; an empty cell, "clean", "valid" or "green" says nothing against it. */
function markOf(cells: readonly (readonly [header: string, cell: string])[]): StintLapReason | null {
	for (const [header, cell] of cells) {
		const text = cell.toLowerCase().replace(/[_-]+/g, ' ').trim();
		if (text === '' || /^(valid|clean|ok|green|normal|timed|flying|fast|0|-|–|none|grün)$/.test(text)) continue;
		if (/^pits?$/.test(header) && /^(1|x|yes|true|ja)$/.test(text)) return 'in_lap';
		if (/^valid/.test(header)) {
			if (/^(0|no|false|nein|invalid)$/.test(text)) return 'marked';
			continue;
		}
		const found = MARKS.find(([, pattern]) => pattern.test(text));
		if (found) return found[0];
	}
	return null;
}

/** Laps of all stints but the longest are marked so; an out lap or an in lap between others starts a new one. */
function longestStint(rows: readonly { lap: RawStintLap; stint: string }[], warnings: StintWarning[]): RawStintLap[] {
	const stints: RawStintLap[][] = [];
	rows.forEach(({ lap, stint }, i) => {
		const before = rows[i - 1];
		const fresh = !before || before.stint !== stint || lap.marked === 'out_lap' || before.lap.marked === 'in_lap';
		if (fresh) stints.push([lap]);
		else stints.at(-1)?.push(lap);
	});
	const whole = stints.filter((stint) => stint.length > 1);
	if (whole.length < 2) return rows.map(({ lap }) => lap);
	warnings.push('more_stints');
	const longest = whole.reduce((best, stint) => (stint.length > best.length ? stint : best));
	return stints.flatMap((stint) =>
		stint === longest ? stint : stint.map((lap): RawStintLap => ({ ...lap, marked: lap.marked ?? 'other_stint' }))
	);
}
