import './server.ts';
import { isHttpError, isRedirect, type RequestEvent } from '@sveltejs/kit';
import { handle } from '../../src/hooks.server.ts';
import { CookieJar } from './cookieJar.ts';

/**
 * Requests through the real `handle` to the real routes, without a port: the route is found by its folder, its handler, loads or
 * action is called, and what it throws is answered as SvelteKit would. A page answers its data as JSON.
 */

type Handler = (event: RequestEvent) => Response | Promise<Response>;
interface RouteModule {
	GET?: Handler;
	PUT?: Handler;
	POST?: Handler;
	PATCH?: Handler;
	DELETE?: Handler;
	HEAD?: Handler;
	load?: (event: unknown) => unknown;
	actions?: Record<string, (event: RequestEvent) => unknown>;
}

const modules = import.meta.glob<RouteModule>('/src/routes/**/+{server,page.server,layout.server}.ts');
const pages = Object.keys(import.meta.glob('/src/routes/**/+page.svelte'));

export interface Route {
	/** as SvelteKit names it, with groups */
	id: string;
	pattern: RegExp;
	params: string[];
	/** is there a page (a component) */
	isPage: boolean;
	endpoint: string | null;
	page: string | null;
	/** from the root inwards */
	layouts: string[];
}

/** Every route of the product, out of the folders. */
export const ROUTES: readonly Route[] = findRoutes();

function findRoutes(): Route[] {
	const folders = new Set(
		[...Object.keys(modules), ...pages].filter((file) => !file.includes('+layout')).map(folderOf)
	);
	// As SvelteKit does: a name that is written out comes before one that stands for any.
	return [...folders]
		.sort((a, b) => (a.replaceAll('[', '~') < b.replaceAll('[', '~') ? -1 : 1))
		.map((folder) => {
			const id = folder.slice('/src/routes'.length) || '/';
			const segments = id.split('/').filter((part) => part !== '' && !/^\(.*\)$/.test(part));
			const params: string[] = [];
			const pattern = segments.map((part) => {
				const param = /^\[(\w+)\]$/.exec(part);
				if (!param) return part.replaceAll('.', '\\.');
				params.push(param[1]);
				return '([^/]+)';
			});
			const has = (file: string) => (file in modules ? file : null);
			return {
				id,
				pattern: new RegExp(`^/${pattern.join('/')}/?$`),
				params,
				isPage: pages.includes(`${folder}/+page.svelte`),
				endpoint: has(`${folder}/+server.ts`),
				page: has(`${folder}/+page.server.ts`),
				layouts: ancestors(folder).flatMap((parent) => has(`${parent}/+layout.server.ts`) ?? [])
			};
		});
}

function folderOf(file: string): string {
	return file.slice(0, file.lastIndexOf('/'));
}

function ancestors(folder: string): string[] {
	const parts = folder.slice('/src/routes'.length).split('/').filter(Boolean);
	return parts.reduce<string[]>((all, part) => [...all, `${all[all.length - 1]}/${part}`], ['/src/routes']);
}

export interface RequestOptions {
	method?: string;
	body?: BodyInit | null;
	headers?: Record<string, string>;
	jar?: CookieJar;
	/** Origin of a change; the site's own unless said; null for none */
	origin?: string | null;
	address?: string;
}

const SITE = 'http://localhost';

/** What a route answers to: methods of an endpoint, `GET` of a page, `POST ?/name` for each action. */
export async function operationsOf(route: Route): Promise<string[]> {
	const endpoint = route.endpoint ? await modules[route.endpoint]() : {};
	const page = route.page ? await modules[route.page]() : {};
	const methods = ['GET', 'HEAD', 'PUT', 'POST', 'PATCH', 'DELETE'].filter((method) => method in endpoint);
	const actions = Object.keys(page.actions ?? {}).map((name) => (name === 'default' ? 'POST' : `POST ?/${name}`));
	return [...methods, ...(route.isPage ? ['GET'] : []), ...actions];
}

/** Sends one request; cookies that it sets go into the jar. */
export async function testRequest(path: string, options: RequestOptions = {}): Promise<Response> {
	const { method = 'GET', body = null, jar = new CookieJar(), origin = SITE, address = '127.0.0.1' } = options;
	const headers = new Headers(options.headers);
	if (origin !== null && method !== 'GET' && method !== 'HEAD') headers.set('origin', origin);
	if (jar.header !== '') headers.set('cookie', jar.header);
	const url = new URL(path, SITE);
	const request = new Request(url, { method, body, headers, ...(body && { duplex: 'half' }) });
	if (typeof body === 'string' && !headers.has('content-length')) {
		request.headers.set('content-length', String(new TextEncoder().encode(body).length));
	}
	const found = ROUTES.map((route) => ({ route, match: route.pattern.exec(url.pathname) })).find(({ match }) => match);
	const params = Object.fromEntries(
		found?.route.params.map((name, i) => [name, decodeURIComponent(found.match?.[i + 1] ?? '')]) ?? []
	);
	const event = {
		request,
		url,
		params,
		route: { id: found?.route.id ?? null },
		cookies: jar.asCookies(),
		locals: {},
		fetch: () => Promise.reject(new Error('a route requires no request of its own in tests')),
		getClientAddress: () => address,
		setHeaders: () => {},
		platform: undefined,
		isDataRequest: false,
		isSubRequest: false,
		isRemoteRequest: false,
		tracing: { enabled: false }
	};
	const response = await answer(event as never, found?.route ?? null);
	jar.take(response);
	return response;
}

async function answer(event: RequestEvent, route: Route | null): Promise<Response> {
	try {
		return await handle({ event, resolve: (inner) => guarded(() => resolve(inner, route)) });
	} catch (thrown) {
		return answerThrown(thrown);
	}
}

async function guarded(work: () => Promise<Response>): Promise<Response> {
	try {
		return await work();
	} catch (thrown) {
		return answerThrown(thrown);
	}
}

function answerThrown(thrown: unknown): Response {
	if (isRedirect(thrown)) return new Response(null, { status: thrown.status, headers: { location: thrown.location } });
	if (isHttpError(thrown)) return Response.json(thrown.body, { status: thrown.status });
	throw thrown;
}

async function resolve(event: RequestEvent, route: Route | null): Promise<Response> {
	if (!route) return new Response('Not found', { status: 404 });
	const method = event.request.method;
	if (route.endpoint && (!route.isPage || method !== 'GET')) {
		const endpoint = await modules[route.endpoint]();
		const handler = endpoint[method as 'GET'] ?? (method === 'HEAD' ? endpoint.GET : undefined);
		if (handler) return await handler(event);
		return new Response(null, { status: 405, headers: { allow: Object.keys(endpoint).join(', ') } });
	}
	if (method === 'POST') return await act(event, route);
	return new Response(toJson(await loadAll(event, route)), { headers: { 'content-type': 'text/html' } });
}

async function act(event: RequestEvent, route: Route): Promise<Response> {
	const page = route.page ? await modules[route.page]() : {};
	const name = [...event.url.searchParams.keys()].find((key) => key.startsWith('/'))?.slice(1) ?? 'default';
	const action = page.actions?.[name];
	if (!action) return new Response(null, { status: 405, headers: { allow: 'GET' } });
	const outcome = await action(event);
	const status = typeof outcome === 'object' && outcome !== null && 'status' in outcome ? Number(outcome.status) : 200;
	return new Response(toJson(outcome ?? null), { status, headers: { 'content-type': 'text/html' } });
}

async function loadAll(event: RequestEvent, route: Route): Promise<Record<string, unknown>> {
	let data: Record<string, unknown> = {};
	for (const file of [...route.layouts, ...(route.page ? [route.page] : [])]) {
		const { load } = await modules[file]();
		const above = data;
		const loadEvent = Object.assign(Object.create(event) as object, {
			parent: async () => above,
			depends: () => {},
			untrack: (work: () => unknown) => work()
		});
		data = { ...above, ...((await load?.(loadEvent)) as Record<string, unknown> | undefined) };
	}
	return data;
}

const toJson = (data: unknown): string =>
	JSON.stringify(data, (_key, value: unknown) => (ArrayBuffer.isView(value) ? '(columns)' : value));
