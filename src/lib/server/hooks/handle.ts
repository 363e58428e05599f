import { sequence } from '@sveltejs/kit/hooks';
import { handle as authenticate } from '../auth/auth.ts';
import { compressResponse } from '../http/compressResponse.ts';
import { findViewer } from './findViewer.ts';
import { guardRequest } from './guardRequest.ts';
import { nameRequest } from './nameRequest.ts';
import { setHeaders } from './setHeaders.ts';
import { setTheme } from './setTheme.ts';
import { speakProblem } from './speakProblem.ts';

/** From outside to inside: each sees the request before the next, and the answer after it. */
export const handle = sequence(
	nameRequest,
	compressResponse,
	setHeaders,
	speakProblem,
	guardRequest,
	authenticate,
	findViewer,
	setTheme
);
