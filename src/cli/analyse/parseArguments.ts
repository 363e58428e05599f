import type { LineSegment } from '../../lib/analysis/path/lineSegment.ts';
import type { FuelEffect } from '../../lib/analysis/stint/stintFit.ts';
import { KerbnoteError } from '../../lib/schemas/kerbnoteError.ts';

/** What the command line asks for: a run, a pedal sweep or a stint. */
export type AnalyseArguments = RunArguments | PedalArguments | StintArguments;

export interface RunArguments {
	kind: 'run';
	file: string;
	reference?: string;
	lap?: number;
	referenceLap?: number;
	run?: number;
	line?: LineSegment;
}

export interface PedalArguments {
	kind: 'pedal';
	file: string;
}

export interface StintArguments {
	kind: 'stint';
	file: string;
	fuel?: FuelEffect;
}

const USAGE = {
	run: 'analyse FILE.csv[.gz] [--reference REF] [--lap N] [--reference-lap N] [--run N] [--line LAT,LON,LAT,LON]',
	pedal: 'analyse --pedal FILE',
	stint: 'analyse --stint FILE [--fuel KG_PER_LAP,S_PER_KG]'
};
const OPTIONS = {
	run: ['reference', 'lap', 'reference-lap', 'run', 'line'],
	pedal: ['pedal'],
	stint: ['stint', 'fuel']
};
const EVERY_OPTION: readonly string[] = Object.values(OPTIONS).flat();

const refuse = (message: string, kind: keyof typeof USAGE = 'run'): KerbnoteError =>
	new KerbnoteError('bad_arguments', message, `Use: ${USAGE[kind]}`);

/**
 * Reads the command line. Written out, since a latitude south of the equator begins with a minus, which argument readers take for a flag.
 *
 * @throws {KerbnoteError} `bad_arguments`
 */
export function parseAnalyseArguments(words: readonly string[]): AnalyseArguments {
	const { files, values } = readWords(words);
	const kind = values.has('pedal') ? 'pedal' : values.has('stint') ? 'stint' : 'run';
	for (const name of values.keys()) {
		if (!OPTIONS[kind].includes(name))
			throw refuse(`analyse takes no --${name} ${kind === 'run' ? 'without --stint' : `with --${kind}`}`, kind);
	}
	if (kind !== 'run') {
		if (files.length > 0) throw refuse(`analyse requires one file, got ${files.length + 1}`, kind);
		const file = values.get(kind) ?? '';
		return kind === 'pedal' ? { kind, file } : { kind, file, fuel: readFuel(values.get('fuel')) };
	}
	if (files.length !== 1) throw refuse(`analyse requires one file, got ${files.length || 'none'}`);
	const line = values.get('line');
	return {
		kind,
		file: files[0],
		reference: values.get('reference'),
		lap: wholeNumber(values, 'lap', 0),
		referenceLap: wholeNumber(values, 'reference-lap', 0),
		run: wholeNumber(values, 'run', 1),
		line: line === undefined ? undefined : readLine(line)
	};
}

function readWords(words: readonly string[]): { files: string[]; values: Map<string, string> } {
	const values = new Map<string, string>();
	const files: string[] = [];
	for (let i = 0; i < words.length; i++) {
		const word = words[i];
		if (!word.startsWith('--')) {
			files.push(word);
			continue;
		}
		const [name, joined] = splitOnce(word.slice(2), '=');
		if (!EVERY_OPTION.includes(name)) throw refuse(`analyse knows no option --${name}`);
		if (values.has(name)) throw refuse(`analyse takes --${name} once`);
		const value = joined ?? words[++i];
		if (!value) throw refuse(`--${name} requires a value`);
		values.set(name, value);
	}
	return { files, values };
}

/** kg burnt in a lap, and s that a kg costs */
function readFuel(text: string | undefined): FuelEffect | undefined {
	if (text === undefined) return undefined;
	const numbers = text.split(',').map((part) => (part.trim() === '' ? NaN : Number(part)));
	const [kgPerLap, sPerKg] = numbers;
	if (numbers.length !== 2 || !(kgPerLap >= 0 && kgPerLap < 100) || !(sPerKg >= 0 && sPerKg < 10))
		throw refuse(`--fuel requires KG_PER_LAP,S_PER_KG, both from 0, got ${text}`, 'stint');
	return { kgPerLap, sPerKg };
}

function splitOnce(text: string, by: string): [string, string | undefined] {
	const at = text.indexOf(by);
	return at < 0 ? [text, undefined] : [text.slice(0, at), text.slice(at + by.length)];
}

function wholeNumber(values: ReadonlyMap<string, string>, name: string, least: number): number | undefined {
	const text = values.get(name);
	if (text === undefined) return undefined;
	if (!/^\d{1,9}$/.test(text) || !(Number(text) >= least))
		throw refuse(`--${name} requires a whole number from ${least}, got ${text}`);
	return Number(text);
}

function readLine(text: string): LineSegment {
	const numbers = text.split(',').map((part) => (part.trim() === '' ? NaN : Number(part)));
	const [latitudeA, longitudeA, latitudeB, longitudeB] = numbers;
	const inRange = (value: number, most: number) => Math.abs(value) <= most;
	const ok =
		numbers.length === 4 &&
		inRange(latitudeA, 90) &&
		inRange(latitudeB, 90) &&
		inRange(longitudeA, 180) &&
		inRange(longitudeB, 180);
	if (!ok) throw refuse(`--line requires LAT,LON,LAT,LON in degrees, got ${text}`);
	if (latitudeA === latitudeB && longitudeA === longitudeB) throw refuse('--line requires two different points');
	return { latitudeA, longitudeA, latitudeB, longitudeB };
}
