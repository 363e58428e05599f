import { preferencesSchema, type Preferences } from '../schemas/views.ts';

export type Theme = Preferences['theme'];

/** Carries the choice to the server before it knows the person, so that the first paint is already right. */
export const THEME_COOKIE = 'kerbnote-theme';

/** What <html data-theme> says before the server has put the choice in its place. */
export const THEME_PLACEHOLDER = '%theme%';

/** The theme in a cookie's value; anything unknown follows the system. */
export function readTheme(value: string | undefined): Theme {
	const parsed = preferencesSchema.shape.theme.safeParse(value);
	return parsed.success ? parsed.data : 'system';
}
