import { expect, test } from './support/journey.ts';

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
