import { pathNumbers } from '$lib/view/geometry/pathNumbers';

/**
 * What a rendered chart draws and says, as lines that stay the same on every machine: each drawing's ink with the corners of its
 * box in whole px, each named element with its name, and the words. For snapshots: a picture of pixels differs from machine to
 * machine, and a diff of it says nothing.
 *
 * @param html as `render` of svelte/server gives it
 */
export function geometryText(html: string): string {
	const lines: string[] = [];
	const markup = html.replace(/<!--[\s\S]*?-->/g, '').replace(/<style[\s\S]*?<\/style>/g, '');
	for (const [, tag, attributes, text] of markup.matchAll(/<([a-z][a-z0-9]*)((?:\s[^<>]*?)?)\/?>([^<]*)/g)) {
		const read = (name: string): string | undefined => new RegExp(`(?:^|\\s)${name}="([^"]*)"`).exec(attributes)?.[1];
		const d = read('d');
		if (tag === 'path' && d !== undefined) lines.push(`  ~ ${boxOf(d)} ${inkOf(read)}`.trimEnd());
		const role = read('role');
		const label = read('aria-label');
		if (role !== undefined || label !== undefined) lines.push(`[${role ?? tag}] ${label ?? ''}`.trimEnd());
		const said = text.replace(/\s+/g, ' ').trim();
		if (said !== '') lines.push(/^h[1-6]$/.test(tag) ? `${'#'.repeat(Number(tag[1]))} ${said}` : said);
	}
	return `${lines.join('\n')}\n`;
}

/** "12,5 to 980,96 in 43 points", px; a path that is no compact one (a hatch) only says how much of it there is. */
function boxOf(d: string): string {
	const points = /^[MlhzV\d\s-]*$/.test(d) ? pathNumbers(d) : [];
	if (points.length === 0) return d === '' ? 'nothing' : 'strokes';
	const span = (of: number[]): [number, number] => [
		of.reduce((a, b) => Math.min(a, b), Infinity),
		of.reduce((a, b) => Math.max(a, b), -Infinity)
	];
	const [left, right] = span(points.map(([x]) => Math.round(x / 10)));
	const [top, foot] = span(points.map(([, y]) => Math.round(y / 10)));
	return `${left},${top} to ${right},${foot} in ${points.length} points`;
}

function inkOf(read: (name: string) => string | undefined): string {
	const ink = (value: string | undefined): string => value?.replace(/^var\(--color-(.+)\)$/, '$1') ?? '';
	return [ink(read('fill')), ink(read('stroke'))].filter((name) => name !== '' && name !== 'none').join(' ');
}
