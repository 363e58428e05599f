import type { Handle } from '@sveltejs/kit';
import { readTheme, THEME_COOKIE, THEME_PLACEHOLDER } from '../../state/theme.ts';

/** Writes the reader's theme on <html>, so that the first paint is right: the person's choice, before sign-in the browser's cookie. */
export const setTheme: Handle = async ({ event, resolve }) => {
	const theme = event.locals.viewer?.preferences.theme ?? readTheme(event.cookies.get(THEME_COOKIE));
	return await resolve(event, {
		transformPageChunk: ({ html }) => html.replace(THEME_PLACEHOLDER, theme)
	});
};
