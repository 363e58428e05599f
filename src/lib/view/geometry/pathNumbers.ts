/**
 * The points of path data as CompactPath writes it, made absolute again: for tests that look at what is drawn.
 *
 * @throws {RangeError} for a command that CompactPath never writes, so that NaN cannot pass as a number
 */
export function pathNumbers(d: string): [number, number][] {
	const points: [number, number][] = [];
	let [x, y] = [0, 0];
	for (const [, command, rest] of d.matchAll(/([a-zA-Z])([^a-zA-Z]*)/g)) {
		const numbers = (rest.match(/-?\d+/g) ?? []).map(Number);
		if (rest.replace(/-?\d+/g, '').trim() !== '' || !'MlhzV'.includes(command))
			throw new RangeError(`no compact path: ${d}`);
		if (command === 'M') {
			[x, y] = numbers;
			points.push([x, y]);
		} else if (command === 'l') {
			for (let i = 0; i < numbers.length; i += 2) {
				x += numbers[i];
				y += numbers[i + 1];
				points.push([x, y]);
			}
		}
	}
	return points;
}
