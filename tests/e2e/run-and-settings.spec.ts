import { expect, hydrated, test } from './support/journey.ts';

/** Each project has a person of its own, so that what one changes does not move under the other. */
const personOf = (isMobile: boolean) => (isMobile ? 'Tomas Ruud' : 'Jonas Velde');

test('a run gets its conditions and names, and goes only after a question', async ({
	page,
	open,
	signIn,
	expectSound,
	isMobile
}) => {
	test.slow();
	const circuit = `Marrow Fen ${isMobile ? 'small' : 'large'}`;
	await signIn(personOf(isMobile));
	await open('/upload');
	await page.getByLabel('Choose files').setInputFiles('fixtures/closed-form/marrow_fen_session_20hz.csv.gz');
	await page.getByRole('link', { name: 'Open this run' }).click({ timeout: 60_000 });
	await expect(page.getByRole('heading', { name: 'Laps', exact: true })).toBeVisible();
	await hydrated(page);

	await test.step('say what it was', async () => {
		await page.getByText('damp', { exact: true }).click();
		await page.getByLabel('Car').fill('Lark single-seater');
		await page.getByLabel('Fuel at start').fill('half a tank');
		await page.getByRole('button', { name: 'Save', exact: true }).click();
		await expect(page.getByText('Write the fuel in kg, as a number')).toBeVisible();
		await page.getByLabel('Fuel at start').fill('38,5');
		await page.getByRole('button', { name: 'Save', exact: true }).click();
		await expect(page.getByText('Saved.')).toBeVisible();
		await page.reload();
		await hydrated(page);
		await expect(page.getByRole('radio', { name: 'damp' })).toBeChecked();
		await expect(page.getByLabel('Car')).toHaveValue('Lark single-seater');
		await expect(page.getByLabel('Fuel at start')).toHaveValue('38.5');
	});

	await test.step('name the circuit and a corner', async () => {
		await page.getByRole('heading', { name: 'Names' }).click();
		await page.getByRole('textbox', { name: 'Circuit' }).fill(circuit);
		await page.getByLabel('Corner 1', { exact: true }).fill('Heron');
		await page.getByRole('button', { name: 'Save the names' }).click();
		await expect(page.getByRole('main').getByText(circuit).first()).toBeVisible();
		await expect(page.getByRole('row', { name: /Heron/ })).toBeVisible();
		await expectSound();
	});

	await test.step('delete it', async () => {
		const path = new URL(page.url()).pathname;
		await page.getByRole('button', { name: 'Delete this run' }).click();
		await page.getByRole('button', { name: 'Keep it' }).click();
		await expect(page.getByRole('dialog')).toBeHidden();
		await page.getByRole('button', { name: 'Delete this run' }).click();
		await expectSound();
		await page.getByRole('button', { name: 'Delete it' }).click();
		await expect(page).toHaveURL(/\/notebook$/);
		await open('/runs');
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('Runs');
		await expect(page.locator(`a[href="${path}"]`)).toHaveCount(0);
	});
});

test('the look changes at once and stays, and a token is shown this once', async ({
	page,
	open,
	signIn,
	expectSound,
	isMobile
}) => {
	await signIn(personOf(isMobile));
	await open('/settings');
	await page.getByText('dark', { exact: true }).click();
	await page.getByRole('button', { name: 'Save', exact: true }).click();
	await expect(page.locator('html[data-theme="dark"]')).toBeAttached();
	await expectSound();
	await page.reload();
	await expect(page.locator('html[data-theme="dark"]')).toBeAttached();
	await hydrated(page);
	await page.getByText('as the device', { exact: true }).click();
	await page.getByRole('button', { name: 'Save', exact: true }).click();
	await expect(page.locator('html[data-theme="system"]')).toBeAttached();

	await page.getByLabel('What it is for').fill('evening script');
	await page.getByRole('button', { name: 'Make a token' }).click();
	await expect(page.getByText('Copy it now.')).toBeVisible();
	await expectSound();
	await page.reload();
	await hydrated(page);
	await expect(page.getByText('Copy it now.')).toBeHidden();
	await page.getByRole('button', { name: 'Revoke evening script' }).first().click();
	await expect(page.getByRole('button', { name: 'Revoke evening script' })).toHaveCount(0);
});
