/** A JSON answer of known length, which a browser keeps but asks about each time. */
export function jsonResponse(body: string, status = 200, headers: Record<string, string> = {}): Response {
	const bytes = new TextEncoder().encode(body);
	return new Response(bytes, {
		status,
		headers: {
			'content-type': 'application/json',
			'content-length': String(bytes.length),
			'cache-control': 'private, no-cache',
			...headers
		}
	});
}

/** Does the browser hold this very answer. */
export function isKnown(request: Request, etag: string): boolean {
	const asked = request.headers.get('if-none-match');
	return asked !== null && asked.split(',').some((tag) => tag.trim().replace(/^W\//, '') === etag);
}

/** The answer to a browser that holds it. */
export function notModified(etag: string): Response {
	return new Response(null, { status: 304, headers: { etag, 'cache-control': 'private, no-cache' } });
}
