import {
	BAR_PER_KPA,
	BAR_PER_PSI,
	KMH_PER_KNOT,
	KMH_PER_MPH,
	KMH_PER_MPS,
	M_PER_FOOT,
	M_PER_KM,
	M_PER_MILE,
	MPS2_PER_G,
	RAD_PER_DEG,
	S_PER_MS
} from '../units.ts';

export type Dimension =
	| 'time'
	| 'length'
	| 'speed'
	| 'ratio'
	| 'pressure'
	| 'force'
	| 'angle'
	| 'acceleration'
	| 'angularVelocity'
	| 'count'
	| 'volume'
	| 'mass'
	| 'other';

export interface Unit {
	/** label shown and kept, also the key */
	id: string;
	dimension: Dimension;
	/** house unit = factor · value (s, m, km/h, %, bar, N, °, m/s², rad/s) */
	factor: number;
}

type Row = readonly [id: string, dimension: Dimension, factor: number, spellings: string];

/** Every unit that a header may carry. Spellings are compared in lower case without spaces. */
const ROWS: readonly Row[] = [
	[
		's',
		'time',
		1,
		's sec secs second seconds sek sekunde sekunden seg segundos secondes secondi segundo seconde seconden 秒'
	],
	['ms', 'time', S_PER_MS, 'ms msec millis millisecond milliseconds millisekunden milisegundos millisecondes ミリ秒'],
	['us', 'time', 1e-6, 'us µs μs usec microseconds'],
	['ns', 'time', 1e-9, 'ns nanoseconds'],
	['min', 'time', 60, 'min minutes minuten'],
	['h', 'time', 3600, 'h hours hr'],
	['m', 'length', 1, 'm meter meters metre metres metros metri mètres metro メートル'],
	['km', 'length', M_PER_KM, 'km kilometer kilometers kilometre kilometres キロ'],
	['ft', 'length', M_PER_FOOT, 'ft feet foot'],
	['mi', 'length', M_PER_MILE, 'mi mile miles'],
	['cm', 'length', 0.01, 'cm'],
	['mm', 'length', 0.001, 'mm'],
	['yd', 'length', 0.9144, 'yd yard yards'],
	['km/h', 'speed', 1, 'km/h kmh kph km/std kmph km/hr km·h-1 kmh-1 km/u キロ毎時 時速'],
	['m/s', 'speed', KMH_PER_MPS, 'm/s mps m/sec ms-1 m·s-1 m.s-1 m/s-1 mètres/s'],
	['mph', 'speed', KMH_PER_MPH, 'mph mi/h miles/h mi/hr'],
	['kn', 'speed', KMH_PER_KNOT, 'kn kt kts knot knots knoten nœuds nudos nodi'],
	['ft/s', 'speed', M_PER_FOOT * KMH_PER_MPS, 'ft/s fps ft/sec'],
	['%', 'ratio', 1, '% pct percent prozent pourcent percentage porcentaje percentuale パーセント ％'],
	['0..1', 'ratio', 100, '0..1 0-1 0…1 0–1 [0-1] ratio normalised normalized norm'],
	['‰', 'ratio', 0.1, '‰ permille'],
	['bar', 'pressure', 1, 'bar bars barg bara bar(g) bar(a)'],
	['mbar', 'pressure', 0.001, 'mbar millibar'],
	['kPa', 'pressure', BAR_PER_KPA, 'kpa'],
	['hPa', 'pressure', 0.001, 'hpa'],
	['Pa', 'pressure', 1e-5, 'pa pascal'],
	['MPa', 'pressure', 10, 'mpa'],
	['psi', 'pressure', BAR_PER_PSI, 'psi psig psia psi(g) psi(a) lb/in2 lbf/in2'],
	['N', 'force', 1, 'n newton newtons'],
	['kN', 'force', 1000, 'kn_force kilonewton'],
	['daN', 'force', 10, 'dan'],
	['kgf', 'force', 9.80665, 'kgf kp'],
	['lbf', 'force', 4.4482216152605, 'lbf lbs-force'],
	[
		'deg',
		'angle',
		1,
		'deg degs degree degrees ° º grad° grad grados gradi degrés degre degres graus graden 度 deg. °deg'
	],
	['rad', 'angle', 1 / RAD_PER_DEG, 'rad rads radian radians radiant radiani radianes ラジアン'],
	['g', 'acceleration', MPS2_PER_G, 'g gs g-force gforce'],
	['m/s²', 'acceleration', 1, 'm/s2 m/s² m/s^2 mps2 m/s/s ms-2 m·s-2 m/sec2 m/sec^2 m/sek² m/s**2'],
	['mg', 'acceleration', MPS2_PER_G / 1000, 'mg'],
	['deg/s', 'angularVelocity', RAD_PER_DEG, 'deg/s °/s º/s dps degs/s deg/sec degrees/s °/sec 度/秒 deg.s-1 °s-1'],
	['rad/s', 'angularVelocity', 1, 'rad/s rads rad/sec rads/s rad.s-1 rads-1 1/s'],
	[
		'1/min',
		'angularVelocity',
		(2 * Math.PI) / 60,
		'1/min rpm r/min rev/min revs/min u/min min-1 min^-1 min⁻¹ tr/min giri/min obr/min obr./min omw/min g/min rev.min-1 1/mn /min 回転/分'
	],
	['raw counts', 'count', 1, 'raw count counts cnt adc lsb bit bits digits raw_counts rawcounts'],
	['switch', 'count', 1, 'switch bool boolean on/off 0/1 flag'],
	['V', 'other', 1, 'v volt volts'],
	['mV', 'other', 1, 'mv'],
	['A', 'other', 1, 'a amp amps'],
	['°C', 'other', 1, 'c °c degc celsius ℃ deg_c degcelsius'],
	['°F', 'other', 1, 'f °f degf fahrenheit ℉'],
	['K', 'other', 1, 'k kelvin'],
	['Nm', 'other', 1, 'nm n·m n.m newtonmeter n*m'],
	['l', 'volume', 1, 'l liter liters litre litres litros litri ltr リットル'],
	['gal', 'volume', 1, 'gal gallon gallons'],
	['kg', 'mass', 1, 'kg kilogram'],
	['lb', 'mass', 1, 'lb lbs'],
	['Hz', 'other', 1, 'hz'],
	['–', 'count', 1, '- – — none # no. nr n/a 1 [-] [1]']
];

const BY_ID = new Map<string, Unit>();
const BY_SPELLING = new Map<string, Unit[]>();
for (const [id, dimension, factor, spellings] of ROWS) {
	const unit = { id, dimension, factor };
	BY_ID.set(id, unit);
	for (const spelling of spellings.split(' ')) {
		const known = BY_SPELLING.get(spelling);
		if (known) known.push(unit);
		else BY_SPELLING.set(spelling, [unit]);
	}
}
// One spelling, two meanings: the channel decides.
addMeaning('ms', 'm/s');
addMeaning('kn', 'kN');
addMeaning('deg', 'deg/s');
addMeaning('rad', 'rad/s');
addMeaning('rads', 'rad');
addMeaning('°', 'deg/s');

function addMeaning(spelling: string, id: string): void {
	const unit = BY_ID.get(id);
	const known = BY_SPELLING.get(spelling);
	if (unit && known && !known.includes(unit)) known.push(unit);
}

/** The unit with this id. @throws {RangeError} for an unknown id */
export function unitById(id: string): Unit {
	const unit = BY_ID.get(id);
	if (!unit) throw new RangeError(`unitById requires a known unit, got ${id}`);
	return unit;
}

/** Is this the id of a unit? */
export function isUnitId(id: string): boolean {
	return BY_ID.has(id);
}

/** Longer text is no unit. */
const MAX_SPELLING = 60;

/**
 * Reads a unit as written in a header, a unit row or a cell.
 *
 * @returns the meanings that it may have, likeliest first; empty where it is no unit
 */
export function readUnit(text: string): readonly Unit[] {
	if (text.length > MAX_SPELLING) return [];
	const spelling = text
		.normalize('NFKC')
		.toLowerCase()
		.replace(/[\s\u200b-\u200f]+/g, '')
		.replace(/^[([{<](.*)[)\]}>]$/, '$1');
	// NFKC turns ² into 2 and º into o; both spellings are in the table.
	return BY_SPELLING.get(spelling) ?? BY_SPELLING.get(text.trim().toLowerCase()) ?? [];
}
