import { defineConfig, devices } from '@playwright/test';

const baseURL = process.env.KERBNOTE_BASE_URL;
if (!baseURL) {
	throw new Error('the journeys need a served product: run them with `npm run test:e2e`, which sets KERBNOTE_BASE_URL');
}
const long = process.env.KERBNOTE_LONG === '1';

/** Root has no sandbox to give; every other account keeps it. The rest keeps the browser from calling out by itself. */
const chromiumFlags = [
	...(process.getuid?.() === 0 ? ['--no-sandbox'] : []),
	'--disable-dev-shm-usage',
	'--disable-quic',
	'--no-first-run',
	'--disable-background-networking',
	'--disable-component-update',
	'--disable-sync'
];

export default defineConfig({
	testDir: '.',
	testMatch: '**/*.spec.ts',
	testIgnore: long ? [] : ['**/*.long.spec.ts'],
	outputDir: '../../var/test/journeys/results',
	snapshotPathTemplate: '{testDir}/snapshots/{testFileName}/{arg}-{projectName}{ext}',
	fullyParallel: true,
	forbidOnly: true,
	retries: 0,
	workers: 2,
	// A machine that also does other work is slow, not wrong: generous, for only a failure waits this long.
	timeout: 120_000,
	expect: { timeout: 25_000 },
	use: {
		baseURL,
		locale: 'en-GB',
		timezoneId: 'UTC',
		trace: 'retain-on-failure',
		launchOptions: { executablePath: process.env.KERBNOTE_CHROMIUM ?? '/usr/bin/chromium', args: chromiumFlags }
	},
	projects: [
		{ name: 'desktop', use: { ...devices['Desktop Chrome'], viewport: { width: 1280, height: 800 } } },
		{
			name: 'phone',
			// A line that is cut does not know how wide the page is, and these journeys are the longest.
			testIgnore: ['**/upload-line.spec.ts', ...(long ? [] : ['**/*.long.spec.ts'])],
			use: { ...devices['Desktop Chrome'], viewport: { width: 390, height: 844 }, hasTouch: true, isMobile: true }
		}
	]
});
