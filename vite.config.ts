import { existsSync } from 'node:fs';
import { resolve } from 'node:path';
import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import { playwright } from '@vitest/browser-playwright';
import { defineConfig, type ViteUserConfig } from 'vitest/config';

const buildFolder = process.env.KERBNOTE_BUILD ?? 'build';
const withLongTests = process.env.KERBNOTE_LONG === '1';

/** What runs outside the web server: threads of the worker, the worker itself, and the commands that start needs. */
const workerEntries = {
	importRun: 'src/workers/importRun.ts',
	worker: 'src/cli/worker.ts',
	migrate: 'src/cli/migrate.ts',
	seed: 'src/cli/seed.ts',
	admin: 'src/cli/admin.ts'
};

/** `vite build --mode workers`, after `vite build`, which empties the folder. Plain `node` runs the results. */
const workers: ViteUserConfig = {
	resolve: { alias: { $lib: resolve('src/lib') } },
	build: {
		ssr: true,
		target: 'node20',
		outDir: resolve(buildFolder, 'workers'),
		emptyOutDir: true,
		copyPublicDir: false,
		rolldownOptions: {
			input: Object.fromEntries(Object.entries(workerEntries).filter(([, path]) => existsSync(path))),
			output: { entryFileNames: '[name].js' }
		}
	}
};

const chromium = playwright({
	launchOptions: {
		executablePath: process.env.KERBNOTE_CHROMIUM ?? '/usr/bin/chromium',
		args: [
			// Root has no sandbox to give.
			...(process.getuid?.() === 0 ? ['--no-sandbox'] : []),
			'--disable-dev-shm-usage',
			'--disable-quic',
			'--no-first-run',
			'--disable-background-networking',
			'--disable-component-update',
			'--disable-sync'
		]
	}
});

const longTests = withLongTests ? [] : ['**/*.long.test.ts'];

/** The web server and everything that a browser loads; also what Vitest runs on. */
const product: ViteUserConfig = {
	plugins: [tailwindcss(), sveltekit()],
	// Inlined fonts would be blocked by the content security policy (font-src 'self').
	build: { assetsInlineLimit: 0 },
	test: {
		testTimeout: withLongTests ? 1_200_000 : 20_000,
		hookTimeout: withLongTests ? 300_000 : 60_000,
		projects: [
			{
				extends: true,
				test: {
					name: 'core',
					environment: 'node',
					// Pure modules hold no state that one file could leave to the next; loading them a hundred times took a third of the time.
					isolate: false,
					include: ['src/**/*.test.ts', 'tests/core/**/*.test.ts'],
					exclude: ['src/**/*.svelte.test.ts', 'src/lib/server/**', ...longTests]
				}
			},
			{
				extends: true,
				test: {
					name: 'db',
					environment: 'node',
					include: [
						'src/lib/server/**/*.test.ts',
						'tests/db/**/*.test.ts',
						'tests/api/**/*.test.ts',
						'tests/faults/**/*.test.ts'
					],
					exclude: longTests,
					globalSetup: ['tests/db/globalSetup.ts'],
					fileParallelism: false
				}
			},
			{
				extends: true,
				test: {
					name: 'browser',
					include: ['src/**/*.svelte.test.ts'],
					exclude: longTests,
					browser: {
						enabled: true,
						headless: true,
						screenshotFailures: false,
						instances: [{ browser: 'chromium' }],
						provider: chromium
					}
				}
			}
		]
	}
};

export default defineConfig(({ mode }) => (mode === 'workers' ? workers : product));
