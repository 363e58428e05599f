import { accountOf } from './support/accounts.ts';
import { expect, test } from './support/journey.ts';

test.describe('signing in', () => {
	test.use({ refusals: [401] });

	test('the first page says what it is for and leads to the sign-in', async ({ page, open, expectSound }) => {
		await open('/');
		await expect(page.getByRole('heading', { name: 'You have a lap file and a feeling' })).toBeVisible();
		await expectSound();
		await page.getByRole('main').getByRole('link', { name: 'Sign in' }).click();
		await expect(page).toHaveURL(/\/sign-in$/);
		await expect(page.getByLabel('E-mail')).toBeVisible();
		await expectSound();
	});

	test('a wrong password is said in words, and the address is kept', async ({ page, open, expectSound }) => {
		const { email } = accountOf('Jonas Velde');
		await open('/sign-in');
		await page.getByLabel('E-mail').fill(email);
		await page.getByLabel('Password').fill('not the password of anybody');
		const answer = page.waitForResponse((response) => response.request().method() === 'POST');
		await page.getByRole('main').getByRole('button', { name: 'Sign in' }).click();
		expect((await answer).status()).toBe(401);
		await expect(page.getByRole('alert')).toHaveText(/do not belong together/);
		await expect(page.getByLabel('E-mail')).toHaveValue(email);
		await expectSound();
	});

	test('a page of the app asks for the sign-in first and comes back to what was asked', async ({ page, open }) => {
		const { email, password } = accountOf('Mira Tansley');
		await open('/runs');
		await expect(page).toHaveURL(/\/sign-in\?redirectTo=%2Fruns$/);
		await page.getByLabel('E-mail').fill(email);
		await page.getByLabel('Password').fill(password);
		await page.getByRole('main').getByRole('button', { name: 'Sign in' }).click();
		await expect(page).toHaveURL(/\/runs$/);
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('Runs');
	});

	test('signing out ends it', async ({ page, signIn, isMobile }) => {
		await signIn('Mira Tansley');
		await page
			.getByText(isMobile ? 'Menu' : 'Mira Tansley', { exact: true })
			.first()
			.click();
		await page.getByRole('button', { name: 'Sign out' }).click();
		await expect(page).toHaveURL(/\/$/);
		await page.goto('/notebook');
		await expect(page).toHaveURL(/\/sign-in/);
	});

	test('works without script', async ({ browser, baseURL }) => {
		const { email, password } = accountOf('Mira Tansley');
		const context = await browser.newContext({ javaScriptEnabled: false, baseURL });
		const page = await context.newPage();
		await page.goto('/sign-in');
		await page.getByLabel('E-mail').fill(email);
		await page.getByLabel('Password').fill(password);
		await page.getByRole('main').getByRole('button', { name: 'Sign in' }).click();
		await expect(page).toHaveURL(/\/notebook$/);
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('Mira’s notebook');
		await context.close();
	});
});
