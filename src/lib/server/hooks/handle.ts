import type { Handle } from '@sveltejs/kit';
import { handle as authenticate } from '../auth/auth.ts';
import { compressResponse } from '../http/compressResponse.ts';
import { findViewer } from './findViewer.ts';
import { guardRequest } from './guardRequest.ts';
import { nameRequest } from './nameRequest.ts';
import { setHeaders } from './setHeaders.ts';
import { setTheme } from './setTheme.ts';
import { speakProblem } from './speakProblem.ts';

/** From outside to inside: each sees the request before the next, and the answer after it. */
const CHAIN: readonly Handle[] = [
	nameRequest,
	compressResponse,
	setHeaders,
	speakProblem,
	guardRequest,
	authenticate,
	findViewer
];

/**
 * The chain as one hook. SvelteKit's own `sequence` would do the same, but only inside its server: it asks for the request's
 * store, and tests send requests through this very function. It also hands on options of `resolve`, which no other link has.
 */
export const handle: Handle = CHAIN.reduceRight<Handle>(
	(inner, outer) =>
		({ event, resolve }) =>
			outer({ event, resolve: (passed) => inner({ event: passed, resolve }) }),
	// Innermost, because it alone hands an option to the framework: how the page's HTML is finished.
	setTheme
);
