import type { Handle } from '@sveltejs/kit';

/** What holds for every answer. The content security policy is written by SvelteKit, with a nonce for each page. */
const HEADERS: Readonly<Record<string, string>> = {
	'x-content-type-options': 'nosniff',
	'x-frame-options': 'DENY',
	'referrer-policy': 'same-origin',
	'cross-origin-opener-policy': 'same-origin',
	'cross-origin-resource-policy': 'same-origin',
	'permissions-policy':
		'camera=(), geolocation=(), microphone=(self), payment=(self), gamepad=(self), usb=(), browsing-topics=()'
};

export const setHeaders: Handle = async ({ event, resolve }) => {
	const response = await resolve(event);
	for (const [name, value] of Object.entries(HEADERS)) {
		if (!response.headers.has(name)) response.headers.set(name, value);
	}
	if (event.url.protocol === 'https:') response.headers.set('strict-transport-security', 'max-age=31536000');
	// What a page shows is the viewer's alone: no shared cache keeps it, and nothing is left to see after signing out.
	if (!response.headers.has('cache-control')) response.headers.set('cache-control', 'private, no-store');
	return response;
};
