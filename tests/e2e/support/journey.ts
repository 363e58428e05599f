import AxeBuilder from '@axe-core/playwright';
import { expect, test as base, type Page } from '@playwright/test';
import { accountOf } from './accounts.ts';

interface Journey {
	/** statuses that the journey asks for: the browser writes a line for each, which is no error then */
	refusals: number[];
	/** does the journey cut requests itself: the browser writes a line for each of those too */
	cutsLines: boolean;
	/** goes to a path and waits until its buttons do something */
	open: (path: string) => Promise<void>;
	/** signs in through the form, as a person does */
	signIn: (name: string) => Promise<void>;
	/** looks at the page as it stands: nothing that axe finds, nothing that scrolls sideways */
	expectSound: () => Promise<void>;
}

/** Playwright's test with the steps that every journey takes; fails on any error in the browser's console. */
export const test = base.extend<Journey>({
	refusals: [[], { option: true }],
	cutsLines: [false, { option: true }],
	page: async ({ page, refusals, cutsLines }, use) => {
		const errors: string[] = [];
		page.on('console', (message) => {
			const expected = refusals.some((status) => message.text().includes(`responded with a status of ${status} `));
			const isCut = cutsLines && message.text().includes('net::ERR_');
			if (message.type() === 'error' && !expected && !isCut) errors.push(message.text());
		});
		page.on('pageerror', (error) => errors.push(String(error)));
		await use(page);
		expect(errors, 'errors in the browser’s console').toEqual([]);
	},
	open: async ({ page }, use) => {
		await use(async (path) => {
			await page.goto(path);
			await hydrated(page);
		});
	},
	signIn: async ({ page, open }, use) => {
		await use(async (name) => {
			const { email, password } = accountOf(name);
			await open('/sign-in');
			await page.getByLabel('E-mail').fill(email);
			await page.getByLabel('Password').fill(password);
			await page.getByRole('main').getByRole('button', { name: 'Sign in' }).click();
			await expect(page).toHaveURL(/\/notebook$/);
			await hydrated(page);
		});
	},
	expectSound: async ({ page }, use) => {
		await use(async () => {
			const { violations } = await new AxeBuilder({ page })
				.withTags(['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa'])
				.analyze();
			expect(violations.map(({ id, nodes }) => ({ id, at: nodes.map(({ target }) => target.join(' ')) }))).toEqual([]);
			const [content, view] = await page.evaluate(() => [document.documentElement.scrollWidth, window.innerWidth]);
			expect(content, 'width of the page').toBeLessThanOrEqual(view);
		});
	}
});
export { expect };

/** Waits until the page listens: a click before that does nothing. */
export async function hydrated(page: Page) {
	await expect(page.locator('html[data-hydrated]')).toBeAttached();
}
