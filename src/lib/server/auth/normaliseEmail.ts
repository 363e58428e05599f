import { z } from 'zod';

/** As stored and compared: NFKC, lower case, no space around it. The length is that of RFC 5321 (path of 256 with its brackets). */
export function normaliseEmail(text: string): string {
	return text.trim().normalize('NFKC').toLowerCase();
}

export const emailSchema = z.string().transform(normaliseEmail).pipe(z.email().max(254));
