import type { Page } from '@playwright/test';
import { expect, hydrated, test } from './support/journey.ts';

/** The pair that the notebook proposes, as the path of its compare page. */
async function openComparison(page: Page): Promise<string> {
	const href = await page.getByRole('main').locator('a[href^="/compare/"]').first().getAttribute('href');
	if (!href) throw new Error('the notebook of the demo requires a comparison to open');
	const path = href.split('/').slice(0, 4).join('/');
	await page.goto(path);
	await hydrated(page);
	return path;
}

/** Addresses of every corner's card, from the compare page. */
async function cardsOf(page: Page, path: string): Promise<string[]> {
	const hrefs = await page
		.getByRole('main')
		.locator(`a[href^="${path}/"]`)
		.evaluateAll((links) => links.map((link) => link.getAttribute('href') ?? ''));
	return [...new Set(hrefs.filter((href) => /\/\d+$/.test(href)))];
}

const widths = (page: Page) => page.evaluate(() => [document.documentElement.scrollWidth, window.innerWidth]);

test('no card of the demo scrolls sideways, on a phone, a tablet, or at twice the size', async ({
	page,
	signIn,
	isMobile
}) => {
	await signIn('Mira Tansley');
	const path = await openComparison(page);
	const cards = await cardsOf(page, path);
	expect(cards.length).toBeGreaterThan(8);
	for (const href of [path, `${path}/lap`, ...cards]) {
		await page.goto(href);
		for (const width of isMobile ? [390] : [1280, 820, 640]) {
			await page.setViewportSize({ width, height: 844 });
			const [content, view] = await widths(page);
			expect(content, `${href} at ${width}`).toBeLessThanOrEqual(view);
		}
	}
});

test('a stretch is marked and read, the view comes nearer and goes back, other laps come on demand', async ({
	page,
	signIn,
	isMobile,
	expectSound
}) => {
	await signIn('Mira Tansley');
	const path = await openComparison(page);
	const traces = page.waitForResponse((response) => response.url().includes('/trace?') && response.ok());
	await page.goto(`${path}/4`);
	await hydrated(page);
	await traces;
	const cursor = page.getByRole('slider', { name: /^Cursor along 4/ });
	const panel = page.getByRole('region', { name: 'Marked stretch' });
	await expect(page.getByRole('button', { name: 'nearer' })).toBeEnabled();

	await test.step('by hand', async () => {
		if (isMobile) {
			await page.getByRole('group', { name: 'Mark a stretch' }).getByRole('button', { name: 'entry' }).tap();
		} else {
			const box = await cursor.boundingBox();
			if (!box) throw new Error('the card requires a chart');
			await page.mouse.move(box.x + box.width * 0.3, box.y + 80);
			await page.mouse.down();
			await page.mouse.move(box.x + box.width * 0.6, box.y + 80, { steps: 6 });
			await page.mouse.up();
		}
		await expect(panel).toContainText(/from \d+\sm to \d+\sm, \d+\sm/);
		await expect(panel).toContainText(/\d\.\d{3}\ss\s(lost|found|level)/);
		await expectSound();
	});

	await test.step('by keys', async () => {
		await cursor.focus();
		await page.keyboard.press('Escape');
		await expect(panel).not.toBeAttached();
		await page.keyboard.press('Shift+ArrowRight');
		await page.keyboard.press('Shift+PageUp');
		await expect(panel).toContainText('11\u00a0m');
		await expect(page).toHaveURL(`${path}/4`);
	});

	await test.step('nearer and back', async () => {
		await page.keyboard.press('+');
		await page.keyboard.press('+');
		await expect(page.getByRole('button', { name: 'whole corner' })).toBeEnabled();
		const [content, view] = await widths(page);
		expect(content).toBeLessThanOrEqual(view);
		await page.getByRole('button', { name: 'whole corner' }).click();
		await expect(page.getByRole('button', { name: 'whole corner' })).toBeDisabled();
	});

	await test.step('other laps', async () => {
		const asked = page.waitForResponse((response) => response.url().includes('/trace?') && response.ok());
		await page.getByRole('button', { name: 'other laps of this run' }).click();
		await asked;
		await expect(page.getByText(/thin grey ink: laps? .+ of this run, clean/)).toBeVisible();
	});
});

test('the whole lap is one page away, reads by keys, and has a table', async ({
	page,
	signIn,
	expectSound,
	browser,
	baseURL
}) => {
	await signIn('Mira Tansley');
	const path = await openComparison(page);
	await page.getByRole('link', { name: 'Whole lap' }).click();
	await expect(page).toHaveURL(`${path}/lap`);
	await expect(page.getByRole('heading', { level: 1, name: 'The whole lap' })).toBeVisible();
	await expect(page.getByRole('figure', { name: /line to line\. The whole lap: [+−]\d/ })).toBeVisible();
	await expect(page.getByRole('button', { name: 'nearer' })).toBeEnabled();
	const cursor = page.getByRole('slider', { name: 'Cursor along the lap' });
	const place = async () => Number(await cursor.getAttribute('aria-valuenow'));
	const before = await place();
	await cursor.focus();
	await page.keyboard.press('ArrowLeft');
	expect(await place()).toBeLessThan(before - 10);
	await page.keyboard.press('+');
	await expect(page.getByRole('button', { name: 'whole lap' })).toBeEnabled();
	await expectSound();
	await page.keyboard.press('t');
	await expect(page.getByRole('region', { name: 'The charts as a table' })).toBeVisible();

	const context = await browser.newContext({
		javaScriptEnabled: false,
		baseURL,
		storageState: await page.context().storageState()
	});
	const plain = await context.newPage();
	await plain.goto(`${path}/lap`);
	await expect(plain.getByRole('slider')).toBeVisible();
	await expect(plain.getByRole('navigation', { name: 'Corners of the lap' }).getByRole('link')).not.toHaveCount(0);
	await context.close();
});

test('the best and the median lap are one switch apart, and a change keeps the place', async ({ page, signIn }) => {
	await signIn('Mira Tansley');
	const path = await openComparison(page);
	await page.goto(`${path}?order=lap`);
	await hydrated(page);
	await page.getByRole('group', { name: 'Lap of the run' }).getByRole('link', { name: 'median lap' }).click();
	await expect(page).not.toHaveURL(new RegExp(path));
	await expect(page).toHaveURL(/\?order=lap$/);
	await expect(page.getByRole('heading', { name: 'Corner by corner' })).toBeVisible();
	await page.goto(`${path}/4?view=table`);
	await hydrated(page);
	await page.getByText('Another lap', { exact: true }).click();
	const other = page.getByRole('link', { name: /^lap\s\d+/ }).and(page.locator(':not([aria-current])'));
	await other.first().click();
	await expect(page).not.toHaveURL(new RegExp(path));
	await expect(page).toHaveURL(/\/4\?view=table$/);
});

test.describe('sound in every width and light', () => {
	for (const colorScheme of ['light', 'dark'] as const) {
		test(`compare page, card and whole lap, ${colorScheme}, calm`, async ({ page, signIn, expectSound, isMobile }) => {
			await page.emulateMedia({ colorScheme, reducedMotion: 'reduce' });
			await signIn('Mira Tansley');
			const path = await openComparison(page);
			for (const href of [path, `${path}/4`, `${path}/lap`]) {
				await page.goto(href);
				await hydrated(page);
				for (const width of isMobile ? [390] : [1280, 820]) {
					await page.setViewportSize({ width, height: 844 });
					await expectSound();
				}
			}
		});
	}
});

test('compare page and whole lap print on landscape paper', async ({ page, signIn }) => {
	await signIn('Mira Tansley');
	const path = await openComparison(page);
	for (const [href, most] of [
		[path, 3],
		[`${path}/lap`, 1]
	] as const) {
		await page.goto(href);
		await hydrated(page);
		for (const format of ['A4', 'Letter'] as const) {
			const pdf = (await page.pdf({ format, preferCSSPageSize: true })).toString('latin1');
			expect(pdf.match(/\/Type\s*\/Page\b/g)?.length, `${href} on ${format}`).toBeLessThanOrEqual(most);
			const [, width, height] = pdf.match(/\/MediaBox\s*\[\s*0 0 ([\d.]+) ([\d.]+)\s*\]/) ?? [];
			expect(Number(width), format).toBeGreaterThan(Number(height));
		}
	}
});
