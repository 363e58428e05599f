import { afterEach, describe, expect, it, vi } from 'vitest';
import { page, userEvent } from 'vitest/browser';
import { render } from 'vitest-browser-svelte';
import '../../../app.css';
import { formatDelta } from '$lib/format/delta';
import { formatUnit } from '$lib/format/unit';
import { cornerCard, type CornerCard as Card } from '$lib/view/cornerCard';
import { exampleComparison } from '$lib/view/example/exampleComparison';
import { exampleSource } from '../exampleSource';
import type { TraceSource } from '../traceSource';
import CornerCard from './CornerCard.svelte';

const view = exampleComparison();
const card = cornerCard(view, 4) as Card;
const { fromM, toM } = card.window;

const slider = () => page.getByRole('slider', { name: 'Cursor along 4 Tern Hairpin' });
const speedAt = (placeM: number) => formatUnit(view.driverGrid.speedKmh[placeM + view.driverGrid.marginM], 'km/h');

/** A card whose traces are there, on a sheet as wide as at a desk unless told otherwise. */
async function show(
	props: Partial<{ source: TraceSource; asTable: boolean; embedded: boolean; ontable: () => void }> = {}
) {
	await page.viewport(1280, 900);
	const screen = await render(CornerCard, { card, source: exampleSource(view, card), ...props });
	// the traces come one turn of the loop later
	await new Promise((done) => setTimeout(done));
	return screen;
}

/** Fires a pointer's event at a share of the chart's width. */
function point(type: string, share: number, pointerType: 'mouse' | 'touch'): void {
	const element = slider().element();
	const { left, width, top } = element.getBoundingClientRect();
	element.dispatchEvent(
		new PointerEvent(type, {
			clientX: left + share * width,
			clientY: top + 50,
			pointerId: 7,
			pointerType,
			bubbles: true
		})
	);
}

afterEach(() => vi.restoreAllMocks());

describe('the cursor', () => {
	it('stands where the server put it before anybody moves it, and reads what the server read', async () => {
		await render(CornerCard, { card });
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(card.cursor.placeM));
		await expect.element(page.getByText(speedAt(card.cursor.placeM)).first()).toBeInTheDocument();
	});

	it('follows a mouse over the rows and reads both laps there', async () => {
		await show();
		point('pointermove', 0.5, 'mouse');
		const placeM = Math.round(fromM + 0.5 * (toM - fromM));
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(placeM));
		await expect.element(page.getByText(speedAt(placeM)).first()).toBeInTheDocument();
	});

	it('does not follow a finger that only passes, but one that drags, and stops at the window’s ends', async () => {
		await show();
		point('pointermove', 0.8, 'touch');
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(card.cursor.placeM));
		point('pointerdown', 0.2, 'touch');
		point('pointermove', 0.8, 'touch');
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(Math.round(fromM + 0.8 * (toM - fromM))));
		point('pointermove', 1.4, 'touch');
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(toM));
		point('pointerup', 1.4, 'touch');
		point('pointermove', 0.3, 'touch');
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(toM));
	});

	it('moves by a metre with the arrows, by ten with shift, and to the ends', async () => {
		await show();
		const start = card.cursor.placeM;
		await userEvent.keyboard('{ArrowUp}');
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(start + 1));
		await userEvent.keyboard('{Shift>}{ArrowUp}{/Shift}');
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(start + 11));
		await userEvent.keyboard('{ArrowDown}');
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(start + 10));
		(slider().element() as HTMLElement).focus();
		await userEvent.keyboard('{End}');
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(toM));
		await userEvent.keyboard('{Home}');
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(fromM));
	});

	it('moves in the plan with the rows', async () => {
		const { container } = await show();
		const dot = () => container.querySelector('figure[aria-label^="Plan"] circle:last-of-type')?.getAttribute('cy');
		const before = dot();
		point('pointermove', 0.7, 'mouse');
		await expect.poll(dot).not.toBe(before);
	});

	it('is read aloud when it rests, once', async () => {
		const { container } = await show();
		const aloud = () => container.querySelector('.unseen[aria-live="polite"]')?.textContent ?? '';
		point('pointermove', 0.4, 'mouse');
		point('pointermove', 0.5, 'mouse');
		expect(aloud()).toBe('');
		await expect.poll(aloud).toMatch(/^\d+\u00a0m; brake .+, reference .+; speed .+; time [+−]/);
	});

	it('says so where the numbers could not be fetched, and keeps the server’s', async () => {
		const source: TraceSource = { load: () => Promise.reject(new Error('offline')) };
		await show({ source });
		await expect.element(page.getByText('could not be fetched', { exact: false })).toBeVisible();
		await expect.element(page.getByText(speedAt(card.cursor.placeM)).first()).toBeInTheDocument();
	});

	it('does not wait for a card that was left', async () => {
		let signal: AbortSignal | undefined;
		const source: TraceSource = { load: (given) => ((signal = given), new Promise(() => {})) };
		const screen = await show({ source });
		await screen.unmount();
		expect(signal?.aborted).toBe(true);
	});
});

describe('a stretch', () => {
	const panel = () => page.getByRole('region', { name: 'Marked stretch' });
	const deltaBetween = (a: number, b: number) => {
		const apart = (placeM: number) =>
			view.driverGrid.timeS[placeM + view.driverGrid.marginM] -
			view.referenceGrid.timeS[placeM + view.referenceGrid.marginM];
		// as the matcher reads it: every space is one space
		return formatDelta(apart(b) - apart(a)).replaceAll('\u00a0', ' ');
	};

	it('is dragged with a mouse and gives its own time', async () => {
		await show();
		point('pointerdown', 0.3, 'mouse');
		point('pointermove', 0.6, 'mouse');
		point('pointerup', 0.6, 'mouse');
		const [a, b] = [0.3, 0.6].map((share) => Math.round(fromM + share * (toM - fromM)));
		await expect.element(panel()).toHaveTextContent(deltaBetween(a, b));
		await expect.element(panel()).toHaveTextContent(`from ${a} m to ${b} m`);
		// the mouse goes on; the stretch stays
		point('pointermove', 0.9, 'mouse');
		await expect.element(panel()).toHaveTextContent(deltaBetween(a, b));
		point('pointerdown', 0.5, 'mouse');
		point('pointerup', 0.5, 'mouse');
		await expect.element(panel()).not.toBeInTheDocument();
	});

	it('begins under a finger that rests first, and not under one that drags at once', async () => {
		await show();
		point('pointerdown', 0.3, 'touch');
		point('pointermove', 0.5, 'touch');
		point('pointerup', 0.5, 'touch');
		await expect.element(panel()).not.toBeInTheDocument();
		point('pointerdown', 0.3, 'touch');
		await new Promise((done) => setTimeout(done, 520));
		point('pointermove', 0.5, 'touch');
		point('pointerup', 0.5, 'touch');
		await expect.element(panel()).toBeVisible();
	});

	it('grows by the metre with shift and an arrow, is read aloud, and Escape ends it', async () => {
		const { container } = await show();
		const start = card.cursor.placeM;
		await userEvent.keyboard('{Shift>}{ArrowRight}{ArrowRight}{ArrowRight}{/Shift}');
		await expect.element(panel()).toHaveTextContent(`from ${start} m to ${start + 3} m, 3 m`);
		await expect
			.poll(() => container.querySelector('.unseen[aria-live="polite"]')?.textContent ?? '')
			.toMatch(/^Stretch from .+\s(lost|found|level).*; brake mean .+; reference .+; speed mean /);
		await userEvent.keyboard('{Escape}');
		await expect.element(panel()).not.toBeInTheDocument();
	});

	it('is one press away for each part of the corner, and sums to the ledger', async () => {
		await show();
		await page.getByRole('group', { name: 'Mark a stretch' }).getByRole('button', { name: 'mid' }).click();
		const mid = card.split.find(({ name }) => name === 'mid');
		const said = (panel().element().querySelector('b')?.textContent ?? '').replace('−', '-');
		// the ledger's borders are no whole metres
		expect(Math.abs(parseFloat(said) - (mid?.deltaS ?? NaN))).toBeLessThan(0.012);
	});
});

describe('the view', () => {
	const button = (name: string) => page.getByRole('button', { name });
	const numbers = (container: Element) => [...container.querySelectorAll('.ruler .metre')].map((n) => n.textContent);

	it('comes nearer with +, goes back with 0, and says the way back', async () => {
		const { container } = await show();
		const before = numbers(container);
		await expect.element(button('whole corner')).toBeDisabled();
		await userEvent.keyboard('+++');
		await expect.element(button('whole corner')).toBeEnabled();
		expect(numbers(container)).not.toEqual(before);
		await userEvent.keyboard('-');
		await userEvent.keyboard('0');
		await expect.element(button('whole corner')).toBeDisabled();
		expect(numbers(container)).toEqual(before);
	});

	it('zooms with Ctrl and the wheel about the place under it, and leaves the wheel alone without', async () => {
		await show();
		const element = slider().element();
		const { left, width, top } = element.getBoundingClientRect();
		const turn = (ctrlKey: boolean) => {
			const event = new WheelEvent('wheel', {
				deltaY: -240,
				ctrlKey,
				clientX: left + 0.75 * width,
				clientY: top + 40,
				bubbles: true,
				cancelable: true
			});
			element.dispatchEvent(event);
			return event.defaultPrevented;
		};
		expect(turn(false)).toBe(false);
		await expect.element(button('whole corner')).toBeDisabled();
		expect(turn(true)).toBe(true);
		await expect.element(button('whole corner')).toBeEnabled();
		point('pointermove', 0.75, 'mouse');
		const placeM = Math.round(fromM + 0.75 * (toM - fromM));
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(placeM));
	});

	it('zooms with two fingers', async () => {
		await show();
		const element = slider().element();
		const { left, width, top } = element.getBoundingClientRect();
		const finger = (type: string, pointerId: number, share: number) =>
			element.dispatchEvent(
				new PointerEvent(type, {
					clientX: left + share * width,
					clientY: top + 40,
					pointerId,
					pointerType: 'touch',
					bubbles: true
				})
			);
		finger('pointerdown', 1, 0.45);
		finger('pointerdown', 2, 0.55);
		finger('pointermove', 2, 0.8);
		finger('pointerup', 1, 0.45);
		finger('pointerup', 2, 0.8);
		await expect.element(button('whole corner')).toBeEnabled();
		await expect.element(page.getByRole('region', { name: 'Marked stretch' })).not.toBeInTheDocument();
	});

	it('follows a cursor that leaves it', async () => {
		await show();
		await userEvent.keyboard('+++');
		(slider().element() as HTMLElement).focus();
		await userEvent.keyboard('{End}');
		await expect.element(page.getByText(`${toM}\u00a0m`).first()).toBeVisible();
	});
});

describe('the run’s other laps', () => {
	it('are drawn and named when they are asked for, and go again', async () => {
		const { container } = await show();
		const grey = () => container.querySelectorAll('[stroke="var(--color-grey-pen)"][fill="none"] path').length;
		expect(grey()).toBe(0);
		const ask = page.getByRole('button', { name: 'other laps of this run' });
		await ask.click();
		await expect.element(page.getByText('thin grey ink: laps 3 and 5 of this run')).toBeVisible();
		expect(grey()).toBe(2 * card.rows.length);
		await ask.click();
		expect(grey()).toBe(0);
	});

	it('say so where they could not be fetched', async () => {
		const source = exampleSource(view, card);
		await show({ source: { ...source, others: { numbers: [2], load: () => Promise.reject(new Error('offline')) } } });
		await page.getByRole('button', { name: 'other laps of this run' }).click();
		await expect.element(page.getByText('The other laps could not be fetched', { exact: false })).toBeVisible();
	});
});

describe('keys', () => {
	it('T asks for the table, P prints', async () => {
		const ontable = vi.fn();
		const print = vi.spyOn(window, 'print').mockImplementation(() => {});
		await show({ ontable });
		await userEvent.keyboard('t');
		expect(ontable).toHaveBeenCalledOnce();
		await userEvent.keyboard('p');
		expect(print).toHaveBeenCalledOnce();
	});

	it('are silent once they are switched off', async () => {
		const ontable = vi.fn();
		await show({ ontable });
		await page.getByLabelText('keys on').click();
		await userEvent.keyboard('t{ArrowUp}');
		expect(ontable).not.toHaveBeenCalled();
		await expect.element(slider()).toHaveAttribute('aria-valuenow', String(card.cursor.placeM));
	});

	it('leave a page alone that the card only stands on', async () => {
		const ontable = vi.fn();
		await show({ ontable, embedded: true });
		await userEvent.keyboard('t');
		expect(ontable).not.toHaveBeenCalled();
		(slider().element() as HTMLElement).focus();
		await userEvent.keyboard('t');
		expect(ontable).toHaveBeenCalledOnce();
	});
});

describe('the table', () => {
	it('holds the numbers of the charts, and no chart', async () => {
		await show({ asTable: true });
		const table = page.getByRole('region', { name: 'The charts as a table' });
		await expect.element(table.getByRole('rowheader', { name: '400', exact: true })).toBeInTheDocument();
		await expect.element(slider()).not.toBeInTheDocument();
		await expect.element(page.getByRole('link', { name: 'the charts' })).toBeVisible();
	});
});

describe('what is said', () => {
	it('names the charts by their finding', async () => {
		await show();
		await expect.element(page.getByRole('figure', { name: /^Plan of Tern Hairpin: \+0\.\d{3}/ })).toBeInTheDocument();
		await expect.element(page.getByRole('article', { name: /4 Tern Hairpin/ })).toBeInTheDocument();
	});

	it('marks the reference’s value in the sentence, and nothing else', async () => {
		const { container } = await show();
		const marks = [...container.querySelectorAll('.why mark')].map((mark) => mark.textContent);
		expect(marks).toContain('393\u00a0m');
	});

	it('keeps the row of a missing channel', async () => {
		const without = exampleComparison({ without: ['brake'] });
		await render(CornerCard, { card: cornerCard(without, 4) as Card });
		await expect.element(page.getByText('No brake channel in either file')).toBeVisible();
	});

	it('gives a sentence in place of a plan that cannot be drawn', async () => {
		const without = exampleComparison({ without: ['positions'] });
		await render(CornerCard, { card: cornerCard(without, 4) as Card });
		await expect.element(page.getByText('there is no plan of the corner', { exact: false })).toBeVisible();
	});
});
