import type { ComparisonView } from '../../schemas/views.ts';
import { exampleComparison, type ExampleOptions } from './exampleComparison.ts';

/** A comparison to draw, and the corner of it that shows the point. */
export interface ExampleView {
	name: string;
	view: ComparisonView;
	corner: number;
}

const OPTIONS: { name: string; corner: number; options: ExampleOptions }[] = [
	{ name: 'typical', corner: 4, options: {} },
	{ name: 'a long exit that is cut', corner: 8, options: {} },
	{ name: 'time found', corner: 11, options: {} },
	{ name: 'other hand', corner: 4, options: { mirrored: true } },
	{ name: 'gap', corner: 4, options: { gaps: [[425, 450]] } },
	{
		name: 'single sample',
		corner: 4,
		options: {
			gaps: [
				[300, 440],
				[440, 700]
			]
		}
	},
	{ name: 'no brake channel', corner: 4, options: { without: ['brake', 'steering'] } },
	{ name: 'no positions', corner: 4, options: { without: ['positions'] } },
	{ name: 'speed alone', corner: 4, options: { without: ['brake', 'throttle', 'steering', 'positions'] } },
	{ name: 'spans the line', corner: 1, options: { lineAtM: 505 } },
	{ name: 'ends after the line', corner: 12, options: { lineAtM: 525 } },
	{ name: 'dense', corner: 3, options: { dense: true } },
	{ name: 'the quicker driver', corner: 4, options: { quicker: true } },
	{ name: 'the same lap', corner: 4, options: { sameLap: true } }
];

export const EXAMPLE_NAMES = OPTIONS.map(({ name }) => name);

/** One of the examples by name; the typical one for a name that is not among them. Made anew on each call. */
export function exampleView(name: string): ExampleView {
	const found = OPTIONS.find((entry) => entry.name === name) ?? OPTIONS[0];
	return { name: found.name, corner: found.corner, view: exampleComparison(found.options) };
}
