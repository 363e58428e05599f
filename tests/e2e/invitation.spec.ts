import type { Browser, Page } from '@playwright/test';
import { accountOf } from './support/accounts.ts';
import { expect, hydrated, test } from './support/journey.ts';

/** Somebody else's browser, signed in. */
async function windowOf(browser: Browser, baseURL: string | undefined, name: string): Promise<Page> {
	const page = await (await browser.newContext({ baseURL })).newPage();
	const { email, password } = accountOf(name);
	await page.goto('/sign-in');
	await page.getByLabel('E-mail').fill(email);
	await page.getByLabel('Password').fill(password);
	await page.getByRole('main').getByRole('button', { name: 'Sign in' }).click();
	await expect(page).toHaveURL(/\/notebook$/);
	return page;
}

/** The link of the newest letter to an address, as whoever runs the demo's site finds it in the outbox. */
async function linkTo(email: string, operator: Page): Promise<string> {
	await operator.goto('/admin/outbox');
	await operator.getByRole('row').filter({ hasText: email }).first().getByRole('link').click();
	await expect(operator.getByRole('heading', { level: 1 })).toBeVisible();
	const href = await operator.getByRole('link', { name: /\/join\// }).getAttribute('href');
	return new URL(href ?? '').pathname;
}

test('a coach invites a driver, who joins, shares a run and takes it back', async ({
	page,
	open,
	signIn,
	expectSound,
	browser,
	baseURL,
	isMobile
}) => {
	test.slow();
	const email = `nella.${isMobile ? 'phone' : 'desktop'}@fernbank.example`;
	const password = 'three pears and a plum';

	await test.step('the coach writes the invitation', async () => {
		await signIn('Rhea Calloway');
		await open('/drivers');
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('Drivers');
		await expect(page.getByRole('link', { name: 'Mira Tansley' })).toBeVisible();
		await expectSound();
		await page.getByLabel('E-mail').fill(email);
		await page.getByLabel('A word of your own').fill('See you on Friday.');
		await page.getByRole('button', { name: 'Send the invitation' }).click();
		await expect(page.getByRole('status')).toContainText(email);
		await expect(page.getByRole('button', { name: `Withdraw the invitation of ${email}` })).toBeVisible();
		await expectSound();
	});

	const operator = await windowOf(browser, baseURL, 'Ilse Garrow');
	const path = await linkTo(email, operator);
	await operator.context().close();

	const driver = await (await browser.newContext({ baseURL })).newPage();
	await test.step('the driver opens the link and makes an account', async () => {
		await driver.goto(path);
		await hydrated(driver);
		await expect(driver.getByRole('heading', { level: 1 })).toHaveText('Rhea Calloway would like to coach you');
		await expect(driver.getByText('See you on Friday.')).toBeVisible();
		await driver.getByLabel('Name').fill('Nella Brandt');
		await driver.getByLabel('Password').fill(password);
		await driver.getByLabel('I am under 18').check();
		await expect(driver.getByLabel('Your guardian’s e-mail')).toBeVisible();
		await driver.getByLabel('I am 18 or older').check();
		await expect(driver.getByLabel('Your guardian’s e-mail')).toBeHidden();
		await driver.getByRole('button', { name: 'Make my account' }).click();
		await expect(driver).toHaveURL(/\/drivers$/);
		await expect(driver.getByRole('button', { name: 'Take back from Rhea Calloway: all runs' })).toBeVisible();
	});

	await test.step('the driver hands over a file and fills in the intake', async () => {
		await driver.goto('/upload');
		await hydrated(driver);
		await driver.getByLabel('Choose files').setInputFiles('fixtures/closed-form/marrow_fen_session_20hz.csv.gz');
		await expect(driver.getByRole('link', { name: 'Open this run' })).toBeVisible({ timeout: 60_000 });
		await driver.goto('/drivers');
		await hydrated(driver);
		await driver.getByRole('link', { name: 'Your intake' }).click();
		await driver.getByLabel('Goals').fill('A calm first season');
		await driver.getByText('always', { exact: true }).click();
		await driver.getByRole('button', { name: 'Save', exact: true }).click();
		await expect(driver.getByText('A calm first season')).toBeVisible();
	});

	const runPath = await test.step('the coach sees the run and the intake', async () => {
		await open('/drivers');
		await page.getByRole('link', { name: 'Nella Brandt' }).click();
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('Nella Brandt');
		await expect(page.getByText('A calm first season')).toBeVisible();
		await expect(page.getByText(/Learn without the drawn line/)).toBeVisible();
		await expectSound();
		await page.getByRole('table').getByRole('link').first().click();
		await expect(page).toHaveURL(/\/runs\//);
		await expect(page.getByRole('heading', { name: 'Laps', exact: true })).toBeVisible();
		return new URL(page.url()).pathname;
	});

	await test.step('the driver takes it back, and the next look shows nothing', async () => {
		await driver.goto('/drivers');
		await hydrated(driver);
		await driver.getByRole('button', { name: 'Take back from Rhea Calloway: all runs' }).click();
		await expect(driver.getByText('Nobody but you.')).toBeVisible();
		await driver.context().close();
		expect((await page.request.get(runPath)).status()).toBe(404);
		await open('/drivers');
		await expect(page.getByRole('link', { name: 'Nella Brandt' })).toHaveCount(0);
	});
});

test('a new password is asked for without a word about who has an account', async ({ page, open, expectSound }) => {
	await open('/sign-in');
	await page.getByRole('link', { name: 'Forgot your password?' }).click();
	await expect(page).toHaveURL(/\/reset$/);
	await expectSound();
	await page.getByLabel('E-mail').fill('nobody@fernbank.example');
	await page.getByRole('button', { name: 'Send the link' }).click();
	await expect(page.getByRole('status')).toContainText('If nobody@fernbank.example has an account');
	await open('/reset/no-link-of-anybody');
	await expect(page.getByText('This link no longer holds')).toBeVisible();
	await expectSound();
});
