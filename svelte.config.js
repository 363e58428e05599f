import adapter from '@sveltejs/adapter-node';
import { vitePreprocess } from '@sveltejs/vite-plugin-svelte';
import { sourceHash } from './src/cli/setup/sourceHash.mjs';

/** @type {import('@sveltejs/kit').Config} */
export default {
	preprocess: vitePreprocess(),
	compilerOptions: { runes: true },
	kit: {
		adapter: adapter({ out: process.env.KERBNOTE_BUILD ?? 'build', precompress: true }),
		// By default the version is the time, and a check or a test that runs beside a build writes another one between its two
		// halves: the pages then look for their data under a name that the script does not know.
		version: { name: sourceHash(import.meta.dirname).slice(0, 16) },
		// Every change, of whatever type, has its origin checked in src/lib/server/hooks/guardRequest.ts, which also knows the one route
		// that mail programs post to from anywhere; the framework's own check would refuse those.
		csrf: { trustedOrigins: ['*'] },
		csp: {
			mode: 'auto',
			directives: {
				'default-src': ['self'],
				'script-src': ['self'],
				'style-src': ['self'],
				'style-src-attr': ['unsafe-inline'],
				'font-src': ['self'],
				'connect-src': ['self'],
				'img-src': ['self', 'data:', 'blob:'],
				'worker-src': ['self', 'blob:'],
				'object-src': ['none'],
				'base-uri': ['self'],
				'form-action': ['self'],
				'frame-ancestors': ['none']
			}
		},
		typescript: {
			config: (config) => {
				config.include.push('../src/**/*.mjs', '../migrations/**/*.ts', '../seeds/**/*.ts', '../*.ts', '../*.js');
			}
		}
	}
};
