import type { Viewer } from '$lib/server/access/viewer';

declare global {
	namespace App {
		interface Error {
			message: string;
			code: string;
			errorId: string;
		}
		interface Locals {
			/** who asks, looked up once per request; null for nobody */
			viewer: Viewer | null;
			/** random, in every log line of the request */
			requestId: string;
		}
	}
}

export {};
