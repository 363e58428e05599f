import { splitLine } from './splitLine.ts';

const SPACE = 32;
const TAB = 9;
const QUOTE = 34;
const CR = 13;
const LF = 10;

/**
 * Splits a line whose cells are set apart by runs of spaces. In a line of names a unit in brackets belongs to the name before it, and
 * a comment sign before the first name is none.
 *
 * @example splitSpaced('  time (s)   speed  (km/h)') // => ['time (s)', 'speed (km/h)']
 */
export function splitSpaced(line: string): string[] {
	const text = line.trim();
	const tight = splitLine(squeezed(text), '\t');
	if (!/\p{L}/u.test(text)) return tight;
	const wide = text.split(/ {2,}/);
	const cells = wide.length > 1 && wide.every((cell) => !/^[\d.,+-]+ +[\d.,+-]/.test(cell)) ? wide : tight;
	const names: string[] = [];
	for (const cell of cells) {
		if (names.length > 0 && /^[([{<]/.test(cell)) names[names.length - 1] += ` ${cell}`;
		else if (names.length > 0 || !/^(?:#|\/\/|%)+$/.test(cell)) names.push(cell);
	}
	return names;
}

function squeezed(text: string): string {
	let out = '';
	let quoted = false;
	for (let i = 0; i < text.length; i++) {
		const letter = text[i];
		if (letter === '"') quoted = !quoted;
		if (letter !== ' ' || quoted) out += letter;
		else if (text[i - 1] !== ' ') out += '\t';
	}
	return out;
}

/**
 * Turns runs of spaces between cells into one tab, chunk by chunk, so that such a table reads like any other. Spaces at either end of a
 * line fall away; those inside quotes stay.
 */
export class SpaceSqueezer {
	#quoted = false;
	#pending = false;
	#lineStart = true;

	/** A new array; the chunk stays as it is. */
	squeeze(chunk: Uint8Array): Uint8Array<ArrayBuffer> {
		const out = new Uint8Array(chunk.length + 1);
		let length = 0;
		for (let i = 0; i < chunk.length; i++) {
			const byte = chunk[i];
			if ((byte === SPACE || byte === TAB) && !this.#quoted) {
				this.#pending = !this.#lineStart;
				continue;
			}
			const lineEnd = byte === LF || byte === CR;
			if (this.#pending && !lineEnd) out[length++] = TAB;
			this.#pending = false;
			if (byte === QUOTE) this.#quoted = !this.#quoted;
			this.#lineStart = lineEnd;
			out[length++] = byte;
		}
		return out.subarray(0, length);
	}
}
