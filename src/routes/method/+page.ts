import { accuracySchema } from '$lib/method/accuracy';
import { DEFINITIONS } from '$lib/method/definitions';
import type { PageLoad } from './$types';

/** Written by the accuracy command; a checkout that never measured has none. */
const measured = import.meta.glob<unknown>('/src/lib/method/accuracy.json', { eager: true, import: 'default' });

export const load = (() => {
	const [table] = Object.values(measured);
	return { definitions: DEFINITIONS, accuracy: table === undefined ? null : accuracySchema.parse(table) };
}) satisfies PageLoad;
