import { render } from 'svelte/server';
import { describe, expect, it } from 'vitest';
import { comparePage } from '$lib/view/comparePage';
import { cornerCard } from '$lib/view/cornerCard';
import { exampleView } from '$lib/view/example/exampleViews';
import { lapPage } from '$lib/view/lapPage';
import CornerCard from './card/CornerCard.svelte';
import CircuitPlan from './compare/CircuitPlan.svelte';
import ContactSheet from './compare/ContactSheet.svelte';
import Ledger from './compare/Ledger.svelte';
import LinkedCorners from './compare/LinkedCorners.svelte';
import { geometryText } from './geometryText';
import WholeLap from './lap/WholeLap.svelte';

/** typical, empty, with a gap, dense, tiny, and wrong: what a poor file or a poor pair does to each chart. */
const STATES = [
	'typical',
	'speed alone',
	'single sample',
	'gap',
	'dense',
	'spans the line',
	'no positions',
	'the same lap'
];
const cardHref = (corner: number): string => `#${corner}`;
const name = (state: string): string => state.replaceAll(' ', '-');

describe.each(STATES)('%s', (state) => {
	const { view, corner } = exampleView(state);
	const page = comparePage(view);

	it('draws the corner card as it did', async () => {
		const card = cornerCard(view, corner);
		if (!card) throw new Error(`the example ${state} requires corner ${corner}`);
		const { body } = render(CornerCard, { props: { card } });
		await expect(geometryText(body)).toMatchFileSnapshot(`snapshots/card-${name(state)}.txt`);
	});
	it('draws the whole lap as it did', async () => {
		const { body } = render(WholeLap, { props: { lap: lapPage(view), cardHref, asTable: false, tableHref: '?' } });
		await expect(geometryText(body)).toMatchFileSnapshot(`snapshots/lap-${name(state)}.txt`);
	});
	it('draws the parts of the compare page as they did', async () => {
		const parts = [
			render(Ledger, { props: { ledger: page.ledger, cardHref } }),
			render(LinkedCorners, { props: { groups: page.linked, cardHref } }),
			render(ContactSheet, { props: { page, order: 'worst', orderHref: (order: string) => `?${order}`, cardHref } }),
			...(page.circuit ? [render(CircuitPlan, { props: { plan: page.circuit, cardHref } })] : [])
		];
		const text = parts.map(({ body }) => geometryText(body)).join('\n');
		await expect(text).toMatchFileSnapshot(`snapshots/compare-${name(state)}.txt`);
	});
});

describe('geometryText', () => {
	it('tells a curve that moved by a pixel, and not one that moved by a twentieth', () => {
		const drawn = (y: number): string =>
			geometryText(`<svg><path d="M0 ${y}l100 50" stroke="var(--color-ink)"></path></svg>`);
		expect(drawn(500)).toBe('  ~ 0,50 to 10,55 in 2 points ink\n');
		expect(drawn(501)).toBe(drawn(500));
		expect(drawn(510)).not.toBe(drawn(500));
	});
	it('keeps names and words', () => {
		expect(geometryText('<figure aria-label="Plan of it"><h2>Why</h2><p>Brakes <b>early</b></p></figure>')).toBe(
			'[figure] Plan of it\n## Why\nBrakes\nearly\n'
		);
	});
});
