import { fixtureText, lapFile } from './support/files.ts';
import { expect, hydrated, test } from './support/journey.ts';

const SESSION = 'fixtures/closed-form/marrow_fen_session_20hz.csv.gz';
const ALL_DONE_MS = 90_000;

const personOf = (isMobile: boolean) => (isMobile ? 'Tomas Ruud' : 'Jonas Velde');

test.describe('a file on a bad line', () => {
	// A page lists what the same person sends from another one, too: names of their own, and one after the other.
	test.describe.configure({ mode: 'default' });

	/** Larger than what goes in one piece. */
	const large = (name: string) =>
		lapFile(name, fixtureText('fixtures/simulator/track-a_driver-1.csv.gz'), { paddingChars: 480 });

	test.use({ cutsLines: true });

	test('pauses, goes on, and gets over a cut', async ({ page, open, signIn, isMobile }) => {
		test.slow();
		await signIn(personOf(isMobile));
		await open('/upload');
		let cuts = 0;
		const offsets: number[] = [];
		await page.route('**/api/v1/uploads/resumable/*', async (route) => {
			const request = route.request();
			if (request.method() !== 'PATCH') return await route.continue();
			offsets.push(Number(request.headers()['upload-offset']));
			// The first piece arrives, the second is cut twice.
			if (offsets.at(-1) !== 0 && cuts++ < 2) return await route.abort('connectionreset');
			await route.continue();
		});
		await page
			.getByLabel('Choose files')
			.setInputFiles([large('long.csv'), lapFile('short.csv', fixtureText(SESSION))]);
		const files = page.getByRole('list', { name: 'Files', exact: true }).getByRole('listitem');
		const long = files.filter({ hasText: 'long.csv' });
		await files.filter({ hasText: 'short.csv' }).getByRole('button', { name: 'Pause' }).click();
		await expect(files.filter({ hasText: 'short.csv' })).toContainText('Paused');
		await expect(long).toContainText('Understood', { timeout: ALL_DONE_MS });
		expect(cuts).toBeGreaterThanOrEqual(2);
		// Nothing was sent twice from the beginning.
		expect(offsets.filter((offset) => offset === 0)).toHaveLength(1);
		await files.filter({ hasText: 'short.csv' }).getByRole('button', { name: 'Go on' }).click();
		await expect(files.filter({ hasText: 'short.csv' })).toContainText('Understood', { timeout: ALL_DONE_MS });
	});

	test('goes on by itself after the page is loaded anew in the middle', async ({ page, open, signIn, isMobile }) => {
		test.slow();
		await signIn(personOf(isMobile));
		await open('/upload');
		const offsets: number[] = [];
		let isHeld = true;
		await page.route('**/api/v1/uploads/resumable/*', async (route) => {
			const request = route.request();
			if (request.method() !== 'PATCH') return await route.continue();
			const offset = Number(request.headers()['upload-offset']);
			offsets.push(offset);
			// The second piece never gets anywhere until the page is loaded anew.
			if (offset > 0 && isHeld) return;
			await route.continue();
		});
		await page
			.getByLabel('Choose files')
			.setInputFiles([large('resumed.csv'), lapFile('brief.csv', fixtureText(SESSION))]);
		await expect.poll(() => offsets.length, { timeout: ALL_DONE_MS }).toBeGreaterThanOrEqual(2);
		isHeld = false;
		await page.reload();
		await hydrated(page);
		const files = page.getByRole('list', { name: 'Files', exact: true }).getByRole('listitem');
		await expect(files.filter({ hasText: 'resumed.csv' })).toContainText('Understood', { timeout: ALL_DONE_MS });
		await expect(files.filter({ hasText: 'brief.csv' })).toContainText('Understood', { timeout: ALL_DONE_MS });
		// Both began once, and the first went on where it was.
		expect(offsets.filter((offset) => offset === 0).length).toBeLessThanOrEqual(2);
		expect(offsets.filter((offset) => offset > 0).length).toBeGreaterThanOrEqual(2);
	});
});
