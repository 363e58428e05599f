import { createServer, type IncomingMessage, type ServerResponse } from 'node:http';
import { Readable } from 'node:stream';
import { findViewerOfPerson } from '../../src/lib/server/access/findViewer.ts';
import { database } from '../../src/lib/server/db/database.ts';
import { problemOf } from '../../src/lib/server/http/problem.ts';
import { askToComeBack, RESUMABLE_PATH } from '../../src/lib/server/upload/resumable/askToComeBack.ts';
import { handleResumable } from '../../src/lib/server/upload/resumable/handleResumable.ts';

/**
 * A server that takes files in pieces for one person, by the product's own handler, without pages: what a drill kills. Takes the
 * port and the person's key as arguments.
 */
const [port, personId] = process.argv.slice(2).map(Number);

async function answer(incoming: IncomingMessage): Promise<Response> {
	const url = new URL(incoming.url ?? '/', `http://localhost:${port}`);
	const method = incoming.method ?? 'GET';
	const id = url.pathname.slice(RESUMABLE_PATH.length + 1);
	try {
		const viewer = await findViewerOfPerson(database(), personId);
		if (!viewer) return new Response(null, { status: 401 });
		const body = method === 'PATCH' ? (Readable.toWeb(incoming) as ReadableStream) : null;
		const headers = Object.entries(incoming.headers).flatMap(([name, value]): [string, string][] =>
			typeof value === 'string' ? [[name, value]] : []
		);
		const request = new Request(url, { method, headers, body, ...(body && { duplex: 'half' }) });
		return await handleResumable(viewer, request, id === '' ? null : id);
	} catch (error) {
		return problemOf(error) ?? askToComeBack(method, url.pathname) ?? new Response(String(error), { status: 500 });
	}
}

async function serve(incoming: IncomingMessage, outgoing: ServerResponse): Promise<void> {
	const response = await answer(incoming);
	outgoing.writeHead(response.status, Object.fromEntries(response.headers));
	outgoing.end(Buffer.from(await response.arrayBuffer()));
}

createServer((incoming, outgoing) => {
	serve(incoming, outgoing).catch(() => outgoing.destroy());
}).listen(port, '127.0.0.1', () => console.log('ready'));
