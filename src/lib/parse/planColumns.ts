import type { Channel } from '../schemas/channels.ts';
import type { ColumnMapping } from '../schemas/columnMapping.ts';
import { isUnitId, unitById } from './columnUnits.ts';
import type { Unit } from './columnUnits.ts';
import type { Table } from './findTable.ts';
import { readAngle } from './readAngle.ts';
import { readNumber } from './readNumber.ts';
import { readClock, readDate, timeForm } from './readTime.ts';
import type { TimeForm } from './readTime.ts';
import { recogniseColumn } from './recogniseColumns.ts';
import type { HelperColumn } from './recogniseColumns.ts';

/** One column of the file and what is to be done with it. */
export interface ColumnPlan {
	header: string;
	channel: Channel | HelperColumn | null;
	/** the unit declared in header, row of units, cells or mapping; null: none */
	unit: Unit | null;
	confidence: number;
	/** how times are written; null for other channels */
	timeForm: TimeForm | null;
	/** latitude, longitude with letters or degree signs */
	angle: boolean;
	/** cells are words that only this column's reader understands ("Lap 3", "Out", "N") */
	words: boolean;
	samples: string[];
	/** the header of an earlier column of the same meaning, which is used instead */
	duplicateOf: string | null;
	/** set by a person: values are not second-guessed */
	mapped: boolean;
	/** a person says that its values count the other way */
	turned: boolean;
}

const MAX_SAMPLES = 3;
const MAX_SAMPLE_LENGTH = 40;
const TIMES: ReadonlySet<string> = new Set(['time', 'lapTime', 'lastLapTime']);
const ANGLES: ReadonlySet<string> = new Set(['latitude', 'longitude']);

/** Channels whose cells may be words. */
const WORDS_WELCOME: ReadonlySet<string> = new Set(['gear', 'lap', 'latitudeHemisphere', 'longitudeHemisphere']);

/**
 * Decides what each column of a table is: by mapping where a person set it, else by name and unit; of several columns for one channel
 * the surest is used, among equals the first that is not constant.
 */
export function planColumns(table: Table, mapping?: ColumnMapping): ColumnPlan[] {
	const plans = table.headers.map((header, column): ColumnPlan => {
		const cells = table.firstRows.map((row) => row[column] ?? '');
		const set = mapping?.columns.find(
			(entry) => entry.header === header && (entry.index === undefined || entry.index === column)
		);
		const { channel, unit, confidence } = recogniseColumn(header, table.units[column] || unitInCells(cells));
		const samples = cells
			.filter((cell) => cell.trim() !== '')
			.slice(0, MAX_SAMPLES)
			.map((cell) => cell.trim().slice(0, MAX_SAMPLE_LENGTH));
		const plan: ColumnPlan = {
			header,
			channel,
			unit,
			confidence,
			timeForm: null,
			angle: false,
			words: false,
			samples,
			duplicateOf: null,
			mapped: false,
			turned: false
		};
		if (set) {
			const chosen = set.unit && isUnitId(set.unit) ? unitById(set.unit) : channel === set.channel ? unit : null;
			Object.assign(plan, {
				channel: set.channel,
				unit: chosen,
				confidence: set.channel ? 1 : 0,
				mapped: true,
				turned: set.turned ?? false
			});
		}
		return readForm(plan, cells, table.decimal);
	});
	return chooseOnePerChannel(plans, table);
}

/** The unit that stands behind every number of a column ("54.7 mph"); empty where there is none. */
function unitInCells(cells: readonly string[]): string {
	const first = cells.find((cell) => cell.trim() !== '')?.trim() ?? '';
	const unit = /^[+-]?[\d.,]{1,20} ?([%°a-zµ][a-zµ²0-9/]{0,8})$/i.exec(first)?.[1] ?? '';
	if (unit === '' || /^e/i.test(unit)) return '';
	return cells.every((cell) => cell.trim() === '' || cell.trim().endsWith(unit)) ? unit : '';
}

function readForm(plan: ColumnPlan, cells: readonly string[], decimal: '.' | ','): ColumnPlan {
	const isNumber = (cell: string) => readNumber(cell, decimal) !== undefined;
	const channel = plan.channel ?? '';
	const filled = cells.filter((cell) => cell.trim() !== '');
	if (TIMES.has(channel) || (channel === 'lap' && filled.some((cell) => cell.includes(':')))) {
		plan.timeForm = timeForm(cells, isNumber);
		// "Lap" over stop-watch times is a lap time.
		if (channel === 'lap' && plan.timeForm === 'clock') plan.channel = 'lapTime';
	}
	if (ANGLES.has(channel)) plan.angle = filled.length > 0 && filled.filter(isNumber).length * 2 < filled.length;
	// A name alone makes no channel of a column of words.
	else if (!plan.mapped && !plan.timeForm && channel !== '' && !WORDS_WELCOME.has(channel)) {
		if (filled.length > 0 && filled.filter(isNumber).length * 2 < filled.length)
			Object.assign(plan, { channel: null, confidence: 0 });
	}
	plan.words = WORDS_WELCOME.has(plan.channel ?? '') && filled.some((cell) => /\p{L}/u.test(cell));
	return plan;
}

function chooseOnePerChannel(plans: ColumnPlan[], table: Table): ColumnPlan[] {
	const chosen = new Map<string, ColumnPlan>();
	const rank = (plan: ColumnPlan) =>
		(plan.mapped ? 2 : 0) + plan.confidence - (isConstant(plan, plans, table) ? 0.3 : 0);
	for (const plan of plans) {
		if (plan.channel === null) continue;
		const other = chosen.get(plan.channel);
		if (!other || rank(plan) > rank(other) + 1e-9) chosen.set(plan.channel, plan);
	}
	for (const plan of plans) {
		const used = plan.channel === null ? plan : chosen.get(plan.channel);
		if (used === plan || !used) continue;
		// A surer reading elsewhere leaves this one a guess; only an equal one is a duplicate worth a word.
		if (plan.confidence >= used.confidence - 0.06) plan.duplicateOf = used.header;
		plan.channel = null;
	}
	return plans;
}

function isConstant(plan: ColumnPlan, plans: readonly ColumnPlan[], table: Table): boolean {
	const column = plans.indexOf(plan);
	const cells = table.firstRows.map((row) => row[column] ?? '');
	return cells.length > 20 && cells.every((cell) => cell === cells[0]) && plan.channel === 'speed';
}

const GEARS = new Map([
	['n', 0],
	['neutral', 0],
	['p', 0],
	['r', -1],
	['reverse', -1]
]);

/** How the text of a cell becomes a number for this column: times in their own form, angles in degrees, else as written. */
export function cellReader(plan: ColumnPlan, decimal: '.' | ','): (text: string) => number | undefined {
	const reader = readerOf(plan, decimal);
	// A header row that comes again (two exports in one file) holds no values, and is no fault either.
	return (text) => reader(text) ?? (text.trim() === plan.header ? NaN : undefined);
}

function readerOf(plan: ColumnPlan, decimal: '.' | ','): (text: string) => number | undefined {
	if (plan.timeForm === 'clock') return (text) => (text.trim() === '' ? NaN : readClock(text));
	if (plan.timeForm === 'date') return (text) => (text.trim() === '' ? NaN : readDate(text)?.epochS);
	if (plan.angle) return readAngle;
	if (plan.channel === 'gear')
		return (text) => GEARS.get(text.trim().toLowerCase()) ?? readNumber(withoutWord(text), decimal);
	if (plan.channel === 'lap') return lapReader(plan.header, decimal);
	if (plan.channel === 'latitudeHemisphere' || plan.channel === 'longitudeHemisphere') {
		return (text) => (/^\s*[SW]/i.test(text) ? -1 : 1);
	}
	return (text) => readNumber(text, decimal);
}

/** "Lap 3" is 3; a word without a number ("Out", "In") counts as the lap before the first number, or the one after the last. */
function lapReader(header: string, decimal: '.' | ','): (text: string) => number | undefined {
	let last = NaN;
	return (text) => {
		if (text.trim() === header) return NaN;
		const number = readNumber(withoutWord(text), decimal);
		if (number !== undefined) {
			if (!Number.isNaN(number)) last = number;
			return number;
		}
		return Number.isNaN(last) ? 0 : last + 1;
	};
}

function withoutWord(text: string): string {
	return text.replace(/^\s*\p{L}+[\s._#-]*(?=\d)/u, '');
}

/** May plain numbers of this column be read straight from the bytes? */
export function isPlain(plan: ColumnPlan): boolean {
	return (plan.timeForm === null || plan.timeForm === 'number') && !plan.angle && !plan.words;
}
