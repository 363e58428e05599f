import { dev } from '$app/environment';

/** Is this an installation to try the product out on: a developer's, or one with the demo in it. */
export const isTrial = (): boolean => dev || process.env.KERBNOTE_DEMO === '1';
