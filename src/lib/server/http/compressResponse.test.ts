import { brotliDecompressSync, gunzipSync } from 'node:zlib';
import type { RequestEvent } from '@sveltejs/kit';
import { describe, expect, it } from 'vitest';
import { compressResponse } from './compressResponse.ts';

const LONG_TEXT = 'Brakes 12 m earlier than the reference. '.repeat(200);

describe('compressResponse', () => {
	it.each([
		{ accepts: 'gzip, br', encoding: 'br', decode: brotliDecompressSync },
		{ accepts: 'gzip', encoding: 'gzip', decode: gunzipSync }
	])('sends a page as $encoding with its new length', async ({ accepts, encoding, decode }) => {
		const response = await answer(page(LONG_TEXT), accepts);
		const bytes = Buffer.from(await response.arrayBuffer());
		expect(response.headers.get('content-encoding')).toBe(encoding);
		expect(response.headers.get('vary')).toBe('accept-encoding');
		expect(response.headers.get('content-length')).toBe(String(bytes.byteLength));
		expect(bytes.byteLength).toBeLessThan(LONG_TEXT.length / 20);
		expect(decode(bytes).toString()).toBe(LONG_TEXT);
	});

	it.each(['application/json', 'application/problem+json', 'image/svg+xml', 'application/octet-stream', 'text/csv'])(
		'compresses %s',
		async (type) => {
			const response = await answer(page(LONG_TEXT, { 'content-type': type }), 'br');
			expect(response.headers.get('content-encoding')).toBe('br');
		}
	);

	it.each([
		{ name: 'a small answer', response: page('short') },
		{ name: 'a picture', response: page(LONG_TEXT, { 'content-type': 'image/png' }) },
		{ name: 'an event stream', response: page(LONG_TEXT, { 'content-type': 'text/event-stream' }) },
		{ name: 'what is compressed already', response: page(LONG_TEXT, { 'content-encoding': 'gzip' }) },
		{ name: 'a part of a file', response: page(LONG_TEXT, { 'content-range': 'bytes 0-1/2' }) },
		{ name: 'what must not be changed', response: page(LONG_TEXT, { 'cache-control': 'no-cache, no-transform' }) },
		{ name: 'an answer without a body', response: new Response(null, { status: 204 }) }
	])('leaves $name as it is', async ({ response }) => {
		expect(await answer(response, 'br, gzip')).toBe(response);
	});

	it('sends plain text to a client that reads nothing else, and says that it depends', async () => {
		const response = await answer(page(LONG_TEXT), null);
		expect(response.headers.get('content-encoding')).toBeNull();
		expect(response.headers.get('vary')).toBe('accept-encoding');
		expect(await response.text()).toBe(LONG_TEXT);
	});

	it('keeps every cookie, the status and an earlier Vary', async () => {
		const original = page(LONG_TEXT, { vary: 'accept' }, 422);
		original.headers.append('set-cookie', 'a=1');
		original.headers.append('set-cookie', 'b=2');
		const response = await answer(original, 'br');
		expect(response.status).toBe(422);
		expect(response.headers.getSetCookie()).toEqual(['a=1', 'b=2']);
		expect(response.headers.get('vary')).toBe('accept, accept-encoding');
	});

	it('weakens the tag of a compressed page', async () => {
		const response = await answer(page(LONG_TEXT, { etag: '"v1"' }), 'br');
		expect(response.headers.get('etag')).toBe('W/"v1"');
	});

	it.each(['"v1"', 'W/"v1"'])('keeps the tag where the client has %s, so that it is answered with 304', async (tag) => {
		const response = await answer(page(LONG_TEXT, { etag: '"v1"' }), 'br', { 'if-none-match': tag });
		expect(response.headers.get('etag')).toBe('"v1"');
		expect(response.headers.get('content-encoding')).toBeNull();
	});

	it('hands on each piece of a stream before the next one is there', async () => {
		let source: ReadableStreamDefaultController<Uint8Array> | undefined;
		const body = new ReadableStream<Uint8Array>({ start: (controller) => void (source = controller) });
		const response = await answer(new Response(body, { headers: { 'content-type': 'text/html' } }), 'gzip');
		const reader = response.body?.getReader();
		source?.enqueue(new TextEncoder().encode('first piece'));
		const pieces: Uint8Array[] = [];
		// The header of the format may come by itself.
		while (Buffer.concat(pieces).byteLength < 20) {
			const { value } = (await reader?.read()) ?? {};
			if (value) pieces.push(value);
		}
		source?.enqueue(new TextEncoder().encode(', second piece'));
		source?.close();
		for (let next = await reader?.read(); next?.value; next = await reader?.read()) pieces.push(next.value);
		expect(gunzipSync(Buffer.concat(pieces)).toString()).toBe('first piece, second piece');
	});

	it('tells the source of a stream when the client has gone', async () => {
		let cancelled: () => void;
		const gone = new Promise<void>((resolve) => (cancelled = resolve));
		const body = new ReadableStream<Uint8Array>({
			pull: (controller) => controller.enqueue(new Uint8Array(4096)),
			cancel: () => cancelled()
		});
		const response = await answer(new Response(body, { headers: { 'content-type': 'text/html' } }), 'br');
		await response.body?.cancel();
		await expect(gone).resolves.toBeUndefined();
	});
});

function page(text: string, headers: Record<string, string> = {}, status = 200): Response {
	return new Response(text, {
		status,
		headers: { 'content-type': 'text/html', 'content-length': String(Buffer.byteLength(text)), ...headers }
	});
}

/** Asks the handle for a response that the rest of the server has made already. */
async function answer(made: Response, accepts: string | null, headers: Record<string, string> = {}): Promise<Response> {
	const request = new Request('http://localhost/notebook', {
		headers: { ...headers, ...(accepts === null ? {} : { 'accept-encoding': accepts }) }
	});
	const event: Pick<RequestEvent, 'request'> = { request };
	return await compressResponse({ event: event as RequestEvent, resolve: async () => made });
}
