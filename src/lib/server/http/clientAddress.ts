import type { RequestEvent } from '@sveltejs/kit';

/** From where the request came, or null where the adapter cannot say (a proxy that did not send its header). */
export function clientAddress(event: Pick<RequestEvent, 'getClientAddress'>): string | null {
	try {
		return event.getClientAddress().slice(0, 45);
	} catch {
		return null;
	}
}
