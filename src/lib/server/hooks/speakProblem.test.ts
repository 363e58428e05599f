import '../../../../tests/helpers/server.ts';
import type { RequestEvent } from '@sveltejs/kit';
import { describe, expect, it } from 'vitest';
import { speakProblem } from './speakProblem.ts';

type Asked = Pick<RequestEvent, 'request' | 'url' | 'route'> & { locals: Pick<App.Locals, 'requestId' | 'viewer'> };

async function answer(method: string, path: string, resolve: () => Promise<Response>): Promise<Response> {
	const url = new URL(path, 'http://localhost');
	const event: Asked = {
		request: new Request(url, { method }),
		url,
		route: { id: null },
		locals: { requestId: 'a request', viewer: null }
	};
	return await speakProblem({ event: event as RequestEvent, resolve });
}

const away = () => Promise.reject(new Error('the database is away'));
const PIECES = '/api/v1/uploads/resumable/0123456789abcdefghjkmnpqrs';

describe('a question how far a file is', () => {
	it.each([
		{ name: 'while the database is away', resolve: away },
		{ name: 'while its lock is held', resolve: async () => new Response(null, { status: 500 }) }
	])('is asked to come back $name, so that no client begins anew', async ({ resolve }) => {
		const response = await answer('HEAD', PIECES, resolve);
		expect(response.status).toBe(423);
		expect(response.headers.get('tus-resumable')).toBe('1.0.0');
	});

	it('is told that there is no such file', async () => {
		const response = await answer('HEAD', PIECES, async () => new Response(null, { status: 404 }));
		expect(response.status).toBe(404);
	});
});

it.each(['GET', 'PATCH', 'DELETE'])('a fault of %s stays a fault', async (method) => {
	await expect(answer(method, PIECES, away)).rejects.toThrow('the database is away');
});
