import { seededRandom } from './seededRandom.ts';

/** Pieces that break readers now and then. */
const PIECES = [
	'"',
	'""',
	',',
	';;',
	'\t',
	'\n',
	'\r',
	'\r\n\r\n',
	'\0',
	'\ufeff',
	'NaN',
	'1e999',
	'-',
	'12:30',
	'=1+1',
	'<b>',
	'{',
	'9'.repeat(400),
	' '.repeat(300),
	'２',
	'\u2212'
];

/**
 * A damaged copy of a file: bytes flipped, stretches cut, doubled, moved or zeroed, odd pieces put in.
 *
 * @param seed the same seed makes the same damage
 */
export function mutateFile(bytes: Uint8Array, seed: number): Uint8Array {
	const random = seededRandom(seed);
	const below = (limit: number) => Math.floor(random() * limit);
	let file = bytes;
	for (let times = 1 + below(6); times > 0 && file.length > 0; times--) {
		const at = below(file.length);
		const to = Math.min(file.length, at + 1 + below(below(2) === 0 ? 12 : 4000));
		const [before, stretch, after] = [file.subarray(0, at), file.subarray(at, to), file.subarray(to)];
		const ways = [
			() => [before, stretch.map((byte) => byte ^ (1 << below(8))), after],
			() => [before, after],
			() => [before, stretch, stretch, after],
			() => [stretch, before, after],
			() => [before, new Uint8Array(stretch.length), after],
			() => [before, new TextEncoder().encode(PIECES[below(PIECES.length)]), stretch, after]
		];
		file = joined(ways[below(ways.length)]());
	}
	return file;
}

function joined(parts: readonly Uint8Array[]): Uint8Array {
	const all = new Uint8Array(parts.reduce((sum, { length }) => sum + length, 0));
	let at = 0;
	for (const part of parts) {
		all.set(part, at);
		at += part.length;
	}
	return all;
}
