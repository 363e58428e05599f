import { randomUUID } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { z } from 'zod';
import { fixtureText, lapFile } from './support/files.ts';
import { expect, hydrated, test } from './support/journey.ts';

const FILE = 'track-a_driver-3';

/** Lap times as the simulator itself counted them, line to line: what the page shows is held against them. */
const simulator = z
	.object({
		laps: z.array(
			z.object({ complete: z.boolean(), standing_start: z.boolean(), line_to_line_interp_s: z.number().nullable() })
		)
	})
	.parse(JSON.parse(readFileSync(`fixtures/simulator/${FILE}.laps.json`, 'utf8')));
const flyingLapsS = simulator.laps
	.filter((lap) => lap.complete && !lap.standing_start)
	.map((lap) => lap.line_to_line_interp_s ?? NaN);
/** The page rounds to a millisecond and the simulator's interpolation is good to a tenth of one. */
const TOLERANCE_S = 0.0011;

test('a driver hands over a file and reads where the time went', async ({ page, signIn, expectSound, isMobile }) => {
	test.slow();
	await signIn('Mira Tansley');
	await expectSound();

	await test.step('drop a file', async () => {
		await page.getByRole('main').getByRole('link', { name: 'Add a session' }).first().click();
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('Add a session');
		await expectSound();
		await page.getByLabel('Choose files').setInputFiles(`fixtures/simulator/${FILE}.csv.gz`);
	});

	await test.step('see what was understood', async () => {
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('What we understood', { timeout: 60_000 });
		await expect(page.getByRole('row', { name: /^Speed/ })).toContainText('km/h');
		const shown = await page.getByRole('complementary').getByRole('listitem').allInnerTexts();
		const shownS = shown.flatMap((text) => secondsOf(text) ?? []);
		for (const timeS of flyingLapsS) {
			const nearest = Math.min(...shownS.map((other) => Math.abs(other - timeS)));
			expect(nearest, `a lap of ${timeS} s`).toBeLessThanOrEqual(TOLERANCE_S);
		}
		await expectSound();
	});

	await test.step('open the run', async () => {
		await page.getByRole('link', { name: 'Open this run' }).click();
		await expect(page.getByRole('heading', { name: 'Laps', exact: true })).toBeVisible();
		await hydrated(page);
		await expectSound();
	});

	await test.step('pick a lap and a reference', async () => {
		const lap = page.getByLabel('Your lap');
		const reference = page.getByLabel('Reference');
		const first = await lap
			.locator('option')
			.filter({ hasNotText: /not clean|best/ })
			.first()
			.getAttribute('value');
		await lap.selectOption(first);
		const best = await lap.locator('option', { hasText: 'best' }).getAttribute('value');
		await reference.selectOption(best);
		await page.getByRole('button', { name: 'Compare' }).click();
		await expect(page).toHaveURL(new RegExp(`/compare/${first}/${best}$`));
		await expect(page.getByRole('heading', { name: 'Time ledger' })).toBeVisible();
		await hydrated(page);
		await expectSound();
	});

	await test.step('read a corner card with the arrow keys', async () => {
		await page.goto(`${new URL(page.url()).pathname}/1`);
		await hydrated(page);
		await expectSound();
		if (isMobile) return;
		await page.keyboard.press('ArrowRight');
		await expect(page).toHaveURL(/\/2$/);
		await page.keyboard.press('ArrowLeft');
		await expect(page).toHaveURL(/\/1$/);
	});
});

test('a file that is no recording is refused in words, with what to do', async ({
	page,
	open,
	signIn,
	expectSound
}) => {
	await signIn('Mira Tansley');
	await open('/upload');
	await page.getByLabel('Choose files').setInputFiles({
		name: `${randomUUID()}.csv`,
		mimeType: 'text/csv',
		buffer: Buffer.from(`<!doctype html><html><head><title>Not found</title></head><body>${randomUUID()}</body></html>`)
	});
	await expect(page.getByRole('heading', { level: 1 })).toHaveText('We could not use this file', { timeout: 20_000 });
	await expect(page.getByText('Refused:')).toBeVisible();
	await expect(page.getByText('What to do')).toBeVisible();
	await expectSound();
});

test('several files go one after the other, each with its own word', async ({ page, open, signIn, expectSound }) => {
	test.slow();
	await signIn('Mira Tansley');
	await open('/upload');
	// The page also lists what the same person hands over elsewhere meanwhile, as other journeys do.
	const own = randomUUID();
	const names = [`${own}-a.csv`, `${own}-b.csv`];
	const texts = ['session_20hz', 'gpsonly_10hz'].map((kind) =>
		fixtureText(`fixtures/closed-form/marrow_fen_${kind}.csv.gz`)
	);
	await page.getByLabel('Choose files').setInputFiles(names.map((name, i) => lapFile(name, texts[i])));
	const files = page.getByRole('list', { name: 'Files', exact: true }).getByRole('listitem');
	for (const name of names) {
		const file = files.filter({ hasText: name });
		await expect(file).toContainText('Understood: one run.', { timeout: 60_000 });
		await expect(file.getByRole('link', { name: `What we understood in ${name}` })).toBeVisible();
	}
	await expectSound();
});

test('a browser without script hands over one file by form', async ({ page, signIn, browser, baseURL }) => {
	test.slow();
	await signIn('Mira Tansley');
	const context = await browser.newContext({
		javaScriptEnabled: false,
		baseURL,
		storageState: await page.context().storageState()
	});
	const plain = await context.newPage();
	await plain.goto('/upload');
	await plain.getByLabel('Choose files').setInputFiles('fixtures/simulator/track-a_driver-1.csv.gz');
	await plain.getByRole('button', { name: 'Hand it over' }).click();
	await expect(plain.getByRole('heading', { level: 1 })).toHaveText('What we understood', { timeout: 60_000 });
	await plain.getByRole('link', { name: 'Open this run' }).click();
	await expect(plain.getByRole('button', { name: 'Compare' })).toBeVisible();
	await context.close();
});

test.describe('what is not there', () => {
	test.use({ refusals: [404] });

	test('reads the same as what is not shared', async ({ page, signIn, expectSound }) => {
		await signIn('Mira Tansley');
		const answer = await page.goto('/runs/00000000000000000000000000');
		expect(answer?.status()).toBe(404);
		await expect(page.getByRole('heading', { level: 1 })).toHaveText('Nothing here');
		await expectSound();
	});
});

/** Seconds of a lap time with three decimals within a text, or null. */
function secondsOf(text: string): number | null {
	const found = /(\d+):(\d\d\.\d{3})/.exec(text);
	return found ? Number(found[1]) * 60 + Number(found[2]) : null;
}
