import { z } from 'zod';
import { LONGEST_PASSWORD, SHORTEST_PASSWORD } from './password.ts';

/** A password that somebody chooses: long rather than odd, and not one letter held down. */
export const newPasswordSchema = z
	.string()
	.min(SHORTEST_PASSWORD, `A password has at least ${SHORTEST_PASSWORD} characters; a few words are easier than signs`)
	.max(LONGEST_PASSWORD, `A password has at most ${LONGEST_PASSWORD} characters`)
	.refine((password) => new Set(password).size > 3, 'Use more than three different characters');
