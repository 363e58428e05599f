import { createHash, randomUUID } from 'node:crypto';
import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';

interface StoredObject {
	body: Buffer;
	at: Date;
}
interface OpenUpload {
	key: string;
	at: Date;
	parts: Map<number, Buffer>;
}

/** The protocol asks for at least so much of every part but the last. */
const SMALLEST_PART_BYTES = 5 << 20;

/**
 * A bucket on this machine that speaks the S3 protocol as far as raw files need it: put, multipart, get with range, head, list,
 * delete; and that can be told to fail as a real one does.
 */
export class FakeS3 {
	readonly objects = new Map<string, StoredObject>();
	readonly uploads = new Map<string, OpenUpload>();
	/** requests so far, as "PUT key" */
	readonly log: string[] = [];
	/** called before each request; a status that is returned is answered in its place */
	failWith: (method: string, key: string, query: URLSearchParams) => number | null = () => null;
	delayMs = 0;
	#server: Server | undefined;

	async start(): Promise<string> {
		this.#server = createServer((request, response) => {
			this.#answer(request, response).catch(() => response.destroy());
		});
		await new Promise<void>((resolve) => this.#server?.listen(0, '127.0.0.1', resolve));
		return `http://127.0.0.1:${(this.#server.address() as AddressInfo).port}`;
	}

	async stop(): Promise<void> {
		this.#server?.closeAllConnections();
		await new Promise((resolve) => this.#server?.close(resolve));
	}

	async #answer(request: IncomingMessage, response: ServerResponse): Promise<void> {
		const url = new URL(request.url ?? '/', 'http://bucket');
		const [, bucket, ...rest] = url.pathname.split('/');
		const key = decodeURIComponent(rest.join('/'));
		const method = request.method ?? 'GET';
		const query = url.searchParams;
		this.log.push(`${method} ${key}`);
		const chunks: Buffer[] = [];
		for await (const chunk of request) chunks.push(chunk);
		const body = Buffer.concat(chunks);
		if (this.delayMs > 0) await new Promise((resolve) => setTimeout(resolve, this.delayMs));
		const status = this.failWith(method, key, query);
		if (status !== null) return fail(response, status, status === 503 ? 'SlowDown' : 'InternalError');
		if (bucket !== 'raw') return fail(response, 404, 'NoSuchBucket');
		if (!/^AWS4-HMAC-SHA256 /.test(request.headers.authorization ?? '')) return fail(response, 403, 'AccessDenied');
		if (query.has('uploads') || query.has('uploadId')) return this.#multipart(method, key, query, body, response);
		if (key === '') return this.#list(query, response);
		return this.#object(request, method, key, body, response);
	}

	#object(request: IncomingMessage, method: string, key: string, body: Buffer, response: ServerResponse): void {
		const object = this.objects.get(key);
		if (method === 'PUT') {
			this.objects.set(key, { body, at: new Date() });
			response.writeHead(200, { etag: etagOf(body) }).end();
		} else if (method === 'DELETE') {
			this.objects.delete(key);
			response.writeHead(204).end();
		} else if (!object) {
			fail(response, 404, 'NoSuchKey', method === 'HEAD');
		} else {
			const range = /^bytes=(\d+)-(\d*)$/.exec(request.headers.range ?? '');
			const from = range ? Number(range[1]) : 0;
			const to = range?.[2] ? Number(range[2]) + 1 : object.body.length;
			const part = object.body.subarray(from, to);
			const headers: Record<string, string | number> = {
				'content-length': part.length,
				etag: etagOf(object.body),
				'last-modified': object.at.toUTCString()
			};
			if (range) headers['content-range'] = `bytes ${from}-${to - 1}/${object.body.length}`;
			response.writeHead(range ? 206 : 200, headers).end(method === 'HEAD' ? undefined : part);
		}
	}

	#multipart(method: string, key: string, query: URLSearchParams, body: Buffer, response: ServerResponse): void {
		const id = query.get('uploadId');
		if (id === null && method === 'POST') {
			const made = randomUUID();
			this.uploads.set(made, { key, at: new Date(), parts: new Map() });
			return xml(
				response,
				`<InitiateMultipartUploadResult><UploadId>${made}</UploadId></InitiateMultipartUploadResult>`
			);
		}
		if (id === null) {
			const rows = [...this.uploads].map(
				([uploadId, { key: of, at }]) =>
					`<Upload><Key>${of}</Key><UploadId>${uploadId}</UploadId><Initiated>${at.toISOString()}</Initiated></Upload>`
			);
			return xml(
				response,
				`<ListMultipartUploadsResult><IsTruncated>false</IsTruncated>${rows.join('')}</ListMultipartUploadsResult>`
			);
		}
		const upload = this.uploads.get(id);
		if (!upload || upload.key !== key) return fail(response, 404, 'NoSuchUpload');
		if (method === 'PUT') {
			upload.parts.set(Number(query.get('partNumber')), body);
			response.writeHead(200, { etag: etagOf(body) }).end();
		} else if (method === 'DELETE') {
			this.uploads.delete(id);
			response.writeHead(204).end();
		} else {
			this.#complete(id, upload, body.toString(), response);
		}
	}

	#complete(id: string, upload: OpenUpload, asked: string, response: ServerResponse): void {
		const numbers = [...asked.matchAll(/<PartNumber>(\d+)<\/PartNumber>/g)].map(([, number]) => Number(number));
		const parts = numbers.map((number) => upload.parts.get(number));
		if (parts.some((part) => part === undefined)) return fail(response, 400, 'InvalidPart');
		const whole = parts.flatMap((part) => part ?? []);
		if (whole.slice(0, -1).some((part) => part.length < SMALLEST_PART_BYTES))
			return fail(response, 400, 'EntityTooSmall');
		this.objects.set(upload.key, { body: Buffer.concat(whole), at: new Date() });
		this.uploads.delete(id);
		xml(response, `<CompleteMultipartUploadResult><Key>${upload.key}</Key></CompleteMultipartUploadResult>`);
	}

	/** Two keys a page, so that pages are turned. */
	#list(query: URLSearchParams, response: ServerResponse): void {
		const keys = [...this.objects.keys()].sort();
		const from = Number(query.get('continuation-token') ?? 0);
		const page = keys.slice(from, from + 2);
		const rows = page.map((key) => {
			const object = this.objects.get(key);
			return `<Contents><Key>${key}</Key><LastModified>${object?.at.toISOString()}</LastModified></Contents>`;
		});
		const more = from + 2 < keys.length;
		xml(
			response,
			`<ListBucketResult><IsTruncated>${more}</IsTruncated>${rows.join('')}${
				more ? `<NextContinuationToken>${from + 2}</NextContinuationToken>` : ''
			}</ListBucketResult>`
		);
	}
}

const etagOf = (body: Buffer): string => `"${createHash('md5').update(body).digest('hex')}"`;

function xml(response: ServerResponse, text: string): void {
	response.writeHead(200, { 'content-type': 'application/xml' }).end(`<?xml version="1.0" encoding="UTF-8"?>${text}`);
}

function fail(response: ServerResponse, status: number, code: string, headOnly = false): void {
	response.writeHead(status, { 'content-type': 'application/xml' });
	response.end(headOnly ? undefined : `<?xml version="1.0" encoding="UTF-8"?><Error><Code>${code}</Code></Error>`);
}
