import type { LineSegment } from '../../lib/analysis/path/lineSegment.ts';
import { KerbnoteError } from '../../lib/schemas/kerbnoteError.ts';

export interface AnalyseArguments {
	file: string;
	reference?: string;
	lap?: number;
	referenceLap?: number;
	run?: number;
	line?: LineSegment;
}

const USAGE =
	'analyse FILE.csv[.gz] [--reference REF] [--lap N] [--reference-lap N] [--run N] [--line LAT,LON,LAT,LON]';

const refuse = (message: string): KerbnoteError => new KerbnoteError('bad_arguments', message, `Use: ${USAGE}`);

/**
 * Reads the command line. Written out, since a latitude south of the equator begins with a minus, which argument readers take for a flag.
 *
 * @throws {KerbnoteError} `bad_arguments`
 */
export function parseAnalyseArguments(words: readonly string[]): AnalyseArguments {
	const values = new Map<string, string>();
	const files: string[] = [];
	for (let i = 0; i < words.length; i++) {
		const word = words[i];
		if (!word.startsWith('--')) {
			files.push(word);
			continue;
		}
		const [name, joined] = splitOnce(word.slice(2), '=');
		if (!['reference', 'lap', 'reference-lap', 'run', 'line'].includes(name))
			throw refuse(`analyse knows no option --${name}`);
		if (values.has(name)) throw refuse(`analyse takes --${name} once`);
		const value = joined ?? words[++i];
		if (!value) throw refuse(`--${name} requires a value`);
		values.set(name, value);
	}
	if (files.length !== 1) throw refuse(`analyse requires one file, got ${files.length || 'none'}`);
	const line = values.get('line');
	return {
		file: files[0],
		reference: values.get('reference'),
		lap: wholeNumber(values, 'lap', 0),
		referenceLap: wholeNumber(values, 'reference-lap', 0),
		run: wholeNumber(values, 'run', 1),
		line: line === undefined ? undefined : readLine(line)
	};
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
