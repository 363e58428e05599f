import type { Page } from '@playwright/test';
import { expect, hydrated, test } from './support/journey.ts';

/** The pair that the notebook proposes: the driver's best lap on the coach's. */
async function openComparison(page: Page): Promise<string> {
	const href = await page.getByRole('main').locator('a[href^="/compare/"]').first().getAttribute('href');
	if (!href) throw new Error('the notebook of the demo requires a comparison to open');
	const path = href.split('/').slice(0, 4).join('/');
	await page.goto(path);
	await hydrated(page);
	return path;
}

test('the comparison says where the time went, and adds up', async ({ page, signIn, expectSound, isMobile }) => {
	await signIn('Mira Tansley');
	const path = await openComparison(page);

	await test.step('the gap in words', async () => {
		await expect(page.getByRole('heading', { level: 1 })).toContainText(/[+−]\d+\.\d{3}\ss\s(lost|found)/);
		await expect(page.getByText(/Begin at|There is still time at/)).toBeVisible();
		await expect(page.getByText('Drive within your limits', { exact: false })).toBeVisible();
	});

	await test.step('a ledger that sums to the gap', async () => {
		const ledger = isMobile
			? page.locator('ol.narrow')
			: page.getByRole('region', { name: 'Time ledger' }).locator('tfoot');
		const figures =
			(await ledger.innerText()).match(/[+−]?\d+\.\d{3}/g)?.map((text) => Number(text.replace('−', '-'))) ?? [];
		const gap = figures.pop() ?? NaN;
		const sum = figures.reduce((total, figure) => total + figure, 0);
		// Each figure is rounded to a millisecond.
		expect(Math.abs(sum - gap)).toBeLessThanOrEqual(0.0005 * (figures.length + 1));
	});

	await test.step('the order lives in the address', async () => {
		await page.getByRole('link', { name: 'lap order' }).click();
		await expect(page).toHaveURL(`${path}?order=lap`);
		await expect(page.getByRole('heading', { name: 'Corner by corner' })).toBeVisible();
		await page.reload();
		await expect(page.getByRole('heading', { name: 'Corner by corner' })).toBeVisible();
	});

	await test.step('another lap, another reference', async () => {
		await page.getByText('Another lap', { exact: true }).click();
		await expect(page.getByRole('link', { name: /^lap\s\d+/ }).first()).toBeVisible();
		await expectSound();
	});
});

test('a corner card reads at the cursor, by mouse or finger and by keys', async ({ page, signIn, isMobile }) => {
	await signIn('Mira Tansley');
	const path = await openComparison(page);
	const traces = page.waitForResponse((response) => response.url().includes('/trace?') && response.ok());
	await page.goto(`${path}/2`);
	await hydrated(page);
	await traces;
	const cursor = page.getByRole('slider', { name: /^Cursor along 2/ });
	const place = async () => Number(await cursor.getAttribute('aria-valuenow'));
	const box = await cursor.boundingBox();
	if (!box) throw new Error('the card requires a chart');
	const [x, y] = [box.x + box.width * 0.6, box.y + 60];

	await test.step(isMobile ? 'finger' : 'mouse', async () => {
		const before = await place();
		if (isMobile) await page.touchscreen.tap(x, y);
		else await page.mouse.move(x, y);
		await expect.poll(place).not.toBe(before);
		await expect(page.getByText(/\d+\skm\/h/).first()).toBeVisible();
	});

	await test.step('keys', async () => {
		await cursor.focus();
		const before = await place();
		await page.keyboard.press('ArrowUp');
		expect(await place()).toBe(before + 1);
		await page.keyboard.press('Shift+ArrowDown');
		expect(await place()).toBe(before - 9);
	});

	await test.step('the same as a table, one key away and one key back', async () => {
		await page.keyboard.press('t');
		await expect(page).toHaveURL(`${path}/2?view=table`);
		await expect(page.getByRole('region', { name: 'The charts as a table' })).toBeVisible();
		await page.keyboard.press('ArrowRight');
		await expect(page).toHaveURL(`${path}/3?view=table`);
		await page.keyboard.press('t');
		await expect(page.getByRole('slider')).toBeVisible();
	});
});

test('cards are readable without script, and have the table behind a link', async ({
	page,
	signIn,
	browser,
	baseURL
}) => {
	await signIn('Mira Tansley');
	const path = await openComparison(page);
	const context = await browser.newContext({
		javaScriptEnabled: false,
		baseURL,
		storageState: await page.context().storageState()
	});
	const plain = await context.newPage();
	await plain.goto(path);
	await expect(plain.getByRole('heading', { name: 'Time ledger' })).toBeVisible();
	await plain.goto(`${path}/1`);
	await expect(plain.getByRole('heading', { name: 'Why' })).toBeVisible();
	await expect(plain.getByRole('figure', { name: /^Brake, speed and time/ })).toBeVisible();
	await plain.getByRole('link', { name: /the same as a table/ }).click();
	await expect(plain.getByRole('region', { name: 'The charts as a table' })).toBeVisible();
	await context.close();
});

test('a card prints on one landscape page, light whatever the screen', async ({ page, signIn }) => {
	await page.emulateMedia({ colorScheme: 'dark' });
	await signIn('Mira Tansley');
	const path = await openComparison(page);
	const cards = await page
		.locator(`main a[href^="${path}/"]`)
		.evaluateAll((links) => links.map((link) => link.getAttribute('href') ?? '').filter((href) => /\/\d+$/.test(href)));
	expect(cards.length).toBeGreaterThan(0);
	// The worst first: they have the most lines. A4 is the shorter page.
	for (const [i, card] of [...new Set(cards)].slice(0, 4).entries()) {
		await page.goto(card);
		await hydrated(page);
		for (const format of i === 0 ? (['A4', 'Letter'] as const) : (['A4'] as const)) {
			const pdf = (await page.pdf({ format, preferCSSPageSize: true })).toString('latin1');
			expect(pdf.match(/\/Type\s*\/Page\b/g), `${card} on ${format}`).toHaveLength(1);
			const [, width, height] = pdf.match(/\/MediaBox\s*\[\s*0 0 ([\d.]+) ([\d.]+)\s*\]/) ?? [];
			expect(Number(width), `${card} on ${format}`).toBeGreaterThan(Number(height));
		}
	}
	await page.emulateMedia({ media: 'print', colorScheme: 'dark' });
	expect(await page.evaluate(() => getComputedStyle(document.body).backgroundColor)).toBe('rgb(255, 255, 255)');
});

test.describe('what is not there', () => {
	test.use({ refusals: [404] });

	test('a corner that the layout does not have reads as any other absence', async ({ page, signIn }) => {
		await signIn('Mira Tansley');
		const path = await openComparison(page);
		for (const corner of ['0', '999', 'x']) {
			const answer = await page.goto(`${path}/${corner}`);
			expect(answer?.status(), corner).toBe(404);
		}
	});
});

test.describe('in the dark', () => {
	test.use({ colorScheme: 'dark' });

	test('compare page and card keep their contrast', async ({ page, signIn, expectSound }) => {
		await signIn('Mira Tansley');
		const path = await openComparison(page);
		await expectSound();
		await page.goto(`${path}/1`);
		await hydrated(page);
		await expectSound();
	});
});
