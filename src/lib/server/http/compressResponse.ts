import { Readable, pipeline } from 'node:stream';
import type { ReadableStream as NodeReadableStream } from 'node:stream/web';
import { promisify } from 'node:util';
import { brotliCompress, constants, createBrotliCompress, createGzip, gzip } from 'node:zlib';
import type { Handle } from '@sveltejs/kit';
import { chooseEncoding, type Encoding } from './chooseEncoding.ts';

/** Below this the frame of the compression and its time outweigh what it saves: one network packet carries either. */
const SMALLEST_BYTES = 1024;
/** Pages are compressed for each request: past these levels the time doubles for a few per cent. */
const BROTLI_QUALITY = 4;
const GZIP_LEVEL = 6;

const COMPRESSIBLE =
	/^(text\/(?!event-stream)|image\/svg\+xml|application\/(.*\+)?(json|xml|javascript)|application\/(octet-stream|vnd\.))/i;

/**
 * Compresses pages, JSON and binary columns; the adapter only does so for files. An answer of known length is compressed
 * whole and keeps a length; a streamed one is flushed at every piece, so that nothing waits for the end.
 *
 * Left as they are: small answers, those that are compressed or partial already, event streams, and those that say
 * `no-transform`. Pages carry no secret beside what a request can put into them, so their compressed length gives none away.
 */
export const compressResponse: Handle = async ({ event, resolve }) => {
	const response = await resolve(event);
	if (!isCompressible(response)) return response;
	const headers = new Headers(response.headers);
	headers.append('vary', 'accept-encoding');
	const { status, statusText } = response;
	const encoding = chooseEncoding(event.request.headers.get('accept-encoding'));
	if (encoding === null || event.request.method === 'HEAD' || matchesEtag(event.request, response)) {
		return new Response(response.body, { status, statusText, headers });
	}
	headers.set('content-encoding', encoding);
	// The same page under two encodings is not the same bytes, and a strong tag would say so.
	const etag = headers.get('etag');
	if (etag?.startsWith('"')) headers.set('etag', `W/${etag}`);
	if (!headers.has('content-length')) {
		headers.delete('accept-ranges');
		return new Response(compressStream(response, encoding), { status, statusText, headers });
	}
	const body = await compressWhole(await response.arrayBuffer(), encoding);
	headers.set('content-length', String(body.byteLength));
	return new Response(body, { status, statusText, headers });
};

function isCompressible(response: Response): boolean {
	const { headers, status } = response;
	if (response.body === null || status === 204 || status === 206 || status === 304) return false;
	if (headers.has('content-encoding') || headers.has('content-range')) return false;
	if (/\bno-transform\b/i.test(headers.get('cache-control') ?? '')) return false;
	if (!COMPRESSIBLE.test(headers.get('content-type') ?? '')) return false;
	const length = headers.get('content-length');
	return length === null || Number(length) >= SMALLEST_BYTES;
}

/** SvelteKit answers 304 to a tag that it knows, but only where it finds its own tag unchanged. */
function matchesEtag(request: Request, response: Response): boolean {
	const etag = response.headers.get('etag');
	const asked = request.headers.get('if-none-match');
	return etag !== null && asked !== null && asked.replace(/^W\//, '') === etag;
}

const brotliWhole = promisify(brotliCompress);
const gzipWhole = promisify(gzip);

async function compressWhole(body: ArrayBuffer, encoding: Encoding): Promise<Uint8Array<ArrayBuffer>> {
	const compressed =
		encoding === 'br'
			? await brotliWhole(body, {
					params: {
						[constants.BROTLI_PARAM_QUALITY]: BROTLI_QUALITY,
						[constants.BROTLI_PARAM_SIZE_HINT]: body.byteLength
					}
				})
			: await gzipWhole(body, { level: GZIP_LEVEL });
	return new Uint8Array(compressed);
}

function compressStream(response: Response, encoding: Encoding): ReadableStream<Uint8Array> {
	const compressor =
		encoding === 'br'
			? createBrotliCompress({
					flush: constants.BROTLI_OPERATION_FLUSH,
					params: { [constants.BROTLI_PARAM_QUALITY]: BROTLI_QUALITY }
				})
			: createGzip({ flush: constants.Z_SYNC_FLUSH, level: GZIP_LEVEL });
	// A client that goes away, or a page that fails half-way, destroys both ends; there is nobody left to tell.
	pipeline(Readable.fromWeb(response.body as NodeReadableStream<Uint8Array>), compressor, () => {});
	return Readable.toWeb(compressor) as ReadableStream<Uint8Array>;
}
