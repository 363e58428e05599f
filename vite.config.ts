import { resolve } from 'node:path';
import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import { playwright } from '@vitest/browser-playwright';
import { defineConfig } from 'vitest/config';

const lib = resolve('src/lib');

/** `vite build --mode workers` bundles what runs outside the web server: worker threads, the job worker, migrations, seeds. */
const workerEntries = {
	importRun: 'src/workers/importRun.ts',
	worker: 'src/cli/worker.ts',
	migrate: 'src/cli/migrate.ts',
	seed: 'src/cli/seed.ts',
	admin: 'src/cli/admin.ts'
};

export default defineConfig(({ mode }) =>
	mode === 'workers'
		? {
				resolve: { alias: { $lib: lib } },
				build: {
					ssr: true,
					target: 'node20',
					outDir: 'build/workers',
					emptyOutDir: true,
					copyPublicDir: false,
					rolldownOptions: { input: workerEntries, output: { entryFileNames: '[name].js' } }
				}
			}
		: {
				plugins: [tailwindcss(), sveltekit()],
				// Inlined fonts would be blocked by the content security policy (font-src 'self').
				build: { assetsInlineLimit: 0 },
				test: {
					projects: [
						{
							extends: true,
							test: {
								name: 'core',
								environment: 'node',
								include: ['src/**/*.test.ts', 'tests/core/**/*.test.ts'],
								exclude: ['src/**/*.svelte.test.ts', 'src/lib/server/**']
							}
						},
						{
							extends: true,
							test: {
								name: 'db',
								environment: 'node',
								include: ['src/lib/server/**/*.test.ts', 'tests/db/**/*.test.ts', 'tests/api/**/*.test.ts'],
								globalSetup: ['tests/db/globalSetup.ts'],
								fileParallelism: false
							}
						},
						{
							extends: true,
							test: {
								name: 'browser',
								include: ['src/**/*.svelte.test.ts'],
								browser: {
									enabled: true,
									headless: true,
									screenshotFailures: false,
									instances: [{ browser: 'chromium' }],
									provider: playwright({
										launchOptions: {
											executablePath: process.env.KERBNOTE_CHROMIUM ?? '/usr/bin/chromium',
											args: [
												'--no-sandbox',
												'--disable-background-networking',
												'--disable-component-update',
												'--disable-sync'
											]
										}
									})
								}
							}
						}
					]
				}
			}
);
