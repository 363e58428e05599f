import '../helpers/server.ts';
import { randomUUID } from 'node:crypto';
import { mkdir, rm, writeFile } from 'node:fs/promises';
import { dirname } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { OPERATIONS } from '../../src/lib/server/http/openApi.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { hashToken, newSecret } from '../../src/lib/server/auth/sessions.ts';
import { encodePublicId, newPublicId } from '../../src/lib/server/db/publicId.ts';
import { environment } from '../../src/lib/server/environment.ts';
import { partPath } from '../../src/lib/server/upload/resumable/partStore.ts';
import { CookieJar } from '../helpers/cookieJar.ts';
import {
	addGuardian,
	addMember,
	bearer,
	makeGrant,
	makeOrganisation,
	makePerson,
	signedIn,
	type TestPerson
} from '../helpers/factories.ts';
import { storedRun, type StoredRun } from '../helpers/storedRun.ts';
import { operationsOf, ROUTES, testRequest, type RequestOptions } from '../helpers/testRequest.ts';

/**
 * Every route × everybody × whose data. The routes come from the folders, so a route or an action without an entry fails; what
 * each person may do is said once, by kind of access.
 */

/** Who asks; `all` of Mira's laps were shared with some of them. */
const ACTORS = [
	'nobody',
	'owner',
	'guardian',
	'coach with all',
	'coach with the run',
	'coach with the circuit',
	'coach with the event',
	'coach with another run',
	'coach with another circuit',
	'coach whose grant was revoked',
	'coach whose grant begins tomorrow',
	'manager of the team',
	'coach of the team',
	'admin of the team',
	'driver of the team',
	'manager of another team',
	'manager who left the team',
	'other driver',
	'site operator',
	"owner's token to read",
	"owner's token to upload",
	"owner's token to edit",
	"owner's expired token"
] as const;
type Actor = (typeof ACTORS)[number];

const READERS: readonly Actor[] = [
	'owner',
	'guardian',
	'coach with all',
	'coach with the run',
	'coach with the circuit',
	'coach with the event',
	'manager of the team',
	'coach of the team'
];
const KEEPERS: readonly Actor[] = ['owner', 'guardian'];

/** Notes, focus and debriefs of the matrix are by the coach whom the driver opened everything to. */
const AUTHOR: Actor = 'coach with all';
const LET_IN: Readonly<Partial<Record<string, readonly Actor[]>>> = {
	'reads the run': READERS,
	'keeps the run': KEEPERS,
	'knows the driver': [...READERS, 'coach with another run', 'coach with another circuit'],
	// The other run lies on the same layout.
	'coaches on the layout': [...READERS, 'coach with another run'],
	'reads the note': [...KEEPERS, AUTHOR, 'coach with the circuit', 'manager of the team', 'coach of the team'],
	'answers for the focus': [...KEEPERS, AUTHOR],
	'reads the debrief': [...KEEPERS, AUTHOR],
	'writes the debrief': [AUTHOR],
	'is the driver': KEEPERS
};

/** Who is let in; everybody else reads that nothing is there. */
type Access =
	| 'everybody'
	| 'signed in'
	| 'runs the site'
	| 'reads the run'
	| 'keeps the run'
	| 'knows the driver'
	| 'coaches on the layout'
	| 'reads the note'
	| 'answers for the focus'
	| 'reads the debrief'
	| 'writes the debrief'
	| 'is the driver';
type Scope = 'laps:read' | 'uploads:write' | 'runs:write';

interface Entry {
	access: Access;
	/** of the API: what a token must have been made for; pages open to no token */
	scope?: Scope;
	path: (own: StoredRun) => string;
	request?: (own: StoredRun) => RequestOptions;
	/** status for whom it lets in */
	ok: number;
	/** the sign-in that asks is over afterwards */
	endsSignIn?: boolean;
}

const form = (fields: Record<string, string>): RequestOptions => ({
	method: 'POST',
	body: new URLSearchParams(fields).toString(),
	headers: { 'content-type': 'application/x-www-form-urlencoded' }
});
const json = (method: string, body: unknown): RequestOptions => ({
	method,
	body: JSON.stringify(body),
	headers: { 'content-type': 'application/json' }
});
const pair = ({ lapPublicIds: [reference, driver] }: StoredRun) => `${driver}/${reference}`;
const RUN = ({ runPublicId }: StoredRun) => `/runs/${runPublicId}`;

/** Goes on with a file of which three of ten bytes are here; made new by `restore`. */
const piece = (method: 'HEAD' | 'PATCH' | 'DELETE'): Omit<Entry, 'ok'> => ({
	access: 'keeps the run',
	scope: 'uploads:write',
	path: ({ runId }) => `/api/v1/uploads/resumable/${pieces.get(runId)}`,
	request: () => ({
		method,
		headers: {
			'tus-resumable': '1.0.0',
			...(method === 'PATCH' && { 'upload-offset': '3', 'content-type': 'application/offset+octet-stream' })
		},
		...(method === 'PATCH' && { body: new Uint8Array([1]) })
	})
});
/** Id of an unfinished upload, by the run of its owner. */
const pieces = new Map<number, string>();

/** What a coach wrote about the owner of each run; made new by `restoreCoaching`. */
interface Coached {
	note: string;
	focus: string;
	draft: string;
	sent: string;
	link: string;
	linkId: string;
}
const coachedRuns = new Map<number, Coached & { keys: Record<'note' | 'focus' | 'draft' | 'sent' | 'link', number> }>();
const owners = new Map<number, string>();
const coached = ({ runId }: StoredRun): Coached => {
	const of = coachedRuns.get(runId);
	if (!of) throw new Error(`the matrix requires what a coach wrote on run ${runId}`);
	return of;
};
const ownerOf = ({ runId }: StoredRun): string => owners.get(runId) ?? '';
const TARGET = {
	kind: 'peak_brake',
	least: null,
	most: 75,
	base: 'value',
	scope: { dryOnly: false, afterLap: null, holdsOver: null },
	notSlower: true,
	text: ''
};
const NOTE = { startM: 10, endM: 60, body: 'Firm, then slowly.', target: TARGET };
const CONTENT = {
	opening: 'A good hour.',
	signature: 'Rhea',
	sections: [],
	tasks: [{ key: 'task-1', focus: null, title: 'Wait', where: '' }]
};

const ENTRIES: Record<string, Record<string, Entry>> = {
	'/': { GET: { access: 'everybody', path: () => '/', ok: 200 } },
	'/method': { GET: { access: 'everybody', path: () => '/method', ok: 200 } },
	'/health/live': { GET: { access: 'everybody', path: () => '/health/live', ok: 200 } },
	'/health/ready': { GET: { access: 'everybody', path: () => '/health/ready', ok: 200 } },
	'/(dev)/gallery': { GET: { access: 'everybody', path: () => '/gallery', ok: 200 } },
	'/(dev)/pages-gallery': { GET: { access: 'everybody', path: () => '/pages-gallery', ok: 200 } },
	'/sign-in': {
		GET: { access: 'everybody', path: () => '/sign-in', ok: 200 },
		POST: {
			access: 'everybody',
			path: () => '/sign-in',
			request: () => form({ email: `${randomUUID()}@example.org`, password: 'x', providerId: 'credentials' }),
			ok: 401
		}
	},
	'/reset': {
		GET: { access: 'everybody', path: () => '/reset', ok: 200 },
		POST: { access: 'everybody', path: () => '/reset', request: () => form({ email: 'nowhere' }), ok: 400 }
	},
	// A link that nobody was sent: whoever holds one needs no sign-in.
	'/reset/[token]': {
		GET: { access: 'everybody', path: () => '/reset/none', ok: 200 },
		POST: {
			access: 'everybody',
			path: () => '/reset/none',
			request: () => form({ password: 'four pears, eaten' }),
			ok: 410
		}
	},
	'/join/[token]': {
		GET: { access: 'everybody', path: () => '/join/none', ok: 200 },
		'POST ?/join': { access: 'everybody', path: () => '/join/none?/join', request: () => form({}), ok: 400 },
		'POST ?/accept': {
			access: 'signed in',
			path: () => '/join/none?/accept',
			request: () => form({ sees: 'all' }),
			ok: 409
		},
		'POST ?/decline': { access: 'everybody', path: () => '/join/none?/decline', request: () => form({}), ok: 409 },
		'POST ?/guard': { access: 'everybody', path: () => '/join/none?/guard', request: () => form({}), ok: 400 },
		'POST ?/agree': { access: 'signed in', path: () => '/join/none?/agree', request: () => form({}), ok: 409 },
		'POST ?/refuse': { access: 'everybody', path: () => '/join/none?/refuse', request: () => form({}), ok: 409 }
	},
	'/unsubscribe/[token]': {
		GET: { access: 'everybody', path: () => '/unsubscribe/none', ok: 404 },
		POST: { access: 'everybody', path: () => '/unsubscribe/none', request: () => form({}), ok: 404 }
	},
	'/(app)/drivers': {
		GET: { access: 'signed in', path: () => '/drivers', ok: 200 },
		'POST ?/invite': {
			access: 'signed in',
			path: () => '/drivers?/invite',
			request: () => form({ email: 'nowhere', as: 'coach', asksFor: 'all' }),
			ok: 400
		},
		// An invitation or a grant that is not one's own reads like one that never was.
		'POST ?/again': {
			access: 'signed in',
			path: () => '/drivers?/again',
			request: ({ runPublicId: id }) => form({ id }),
			ok: 404
		},
		'POST ?/withdraw': {
			access: 'signed in',
			path: () => '/drivers?/withdraw',
			request: ({ runPublicId: id }) => form({ id }),
			ok: 404
		},
		'POST ?/revoke': {
			access: 'signed in',
			path: () => '/drivers?/revoke',
			request: ({ runPublicId: id }) => form({ id }),
			ok: 404
		}
	},
	'/(app)/drivers/[driver]': {
		GET: { access: 'knows the driver', path: (at) => `/drivers/${ownerOf(at)}`, ok: 200 }
	},
	'/(app)/drivers/[driver]/intake': {
		GET: { access: 'keeps the run', path: (at) => `/drivers/${ownerOf(at)}/intake`, ok: 200 },
		// A version that nobody has: it was saved elsewhere meanwhile.
		POST: {
			access: 'keeps the run',
			path: (at) => `/drivers/${ownerOf(at)}/intake`,
			request: () => form({ version: '99' }),
			ok: 409
		}
	},
	'/(app)/admin/outbox': { GET: { access: 'runs the site', path: () => '/admin/outbox', ok: 200 } },
	'/(app)/admin/outbox/[letter]': {
		GET: { access: 'runs the site', path: ({ runPublicId: id }) => `/admin/outbox/${id}`, ok: 404 }
	},
	'/sign-out': {
		GET: { access: 'everybody', path: () => '/sign-out', ok: 200 },
		POST: {
			access: 'everybody',
			path: () => '/sign-out',
			request: () => form({ redirectTo: '/' }),
			ok: 302,
			endsSignIn: true
		}
	},
	'/(app)/notebook': { GET: { access: 'signed in', path: () => '/notebook', ok: 200 } },
	'/(app)/runs': { GET: { access: 'signed in', path: () => '/runs', ok: 200 } },
	'/(app)/runs/[run]': {
		GET: { access: 'reads the run', path: RUN, ok: 200 },
		'POST ?/compare': {
			access: 'signed in',
			path: (own) => `${RUN(own)}?/compare`,
			request: ({ lapPublicIds: [reference, lap] }) => form({ lap, reference }),
			ok: 303
		},
		'POST ?/describe': {
			access: 'keeps the run',
			path: (own) => `${RUN(own)}?/describe`,
			request: () => form({ place: 'real', conditions: 'dry', intent: 'pace', car: '', tyreSet: '', fuelKg: '' }),
			ok: 200
		},
		'POST ?/names': {
			access: 'keeps the run',
			path: (own) => `${RUN(own)}?/names`,
			request: () => form({ circuitName: 'Vallmere Park', layoutName: 'grand prix' }),
			ok: 200
		},
		'POST ?/delete': { access: 'keeps the run', path: (own) => `${RUN(own)}?/delete`, request: () => form({}), ok: 303 }
	},
	'/(app)/compare/[lap]/[reference]': {
		GET: { access: 'reads the run', path: (own) => `/compare/${pair(own)}`, ok: 200 }
	},
	'/(app)/compare/[lap]/[reference]/[corner]': {
		GET: { access: 'reads the run', path: (own) => `/compare/${pair(own)}/1`, ok: 200 }
	},
	'/(app)/compare/[lap]/[reference]/lap': {
		GET: { access: 'reads the run', path: (own) => `/compare/${pair(own)}/lap`, ok: 200 }
	},
	'/(app)/upload': {
		GET: { access: 'signed in', path: () => '/upload', ok: 200 },
		POST: { access: 'signed in', path: () => '/upload', request: () => form({}), ok: 400 }
	},
	'/(app)/upload/[upload]': {
		GET: { access: 'keeps the run', path: ({ uploadPublicId }) => `/upload/${uploadPublicId}`, ok: 200 },
		'POST ?/columns': {
			access: 'keeps the run',
			path: ({ uploadPublicId }) => `/upload/${uploadPublicId}?/columns`,
			request: () => form({}),
			ok: 400
		},
		// There is no question to be answered.
		'POST ?/answer': {
			access: 'keeps the run',
			path: ({ uploadPublicId }) => `/upload/${uploadPublicId}?/answer`,
			request: () => form({}),
			ok: 400
		},
		'POST ?/laps': {
			access: 'keeps the run',
			path: ({ uploadPublicId }) => `/upload/${uploadPublicId}?/laps`,
			request: () => form({ source: 'all' }),
			ok: 303
		},
		'POST ?/forget': {
			access: 'keeps the run',
			path: ({ uploadPublicId }) => `/upload/${uploadPublicId}?/forget`,
			request: () => form({}),
			ok: 303
		},
		'POST ?/again': {
			access: 'keeps the run',
			path: ({ uploadPublicId }) => `/upload/${uploadPublicId}?/again`,
			request: () => form({}),
			ok: 303
		}
	},
	'/(app)/upload/deleted': {
		GET: { access: 'signed in', path: () => '/upload/deleted', ok: 200 },
		'POST ?/deleteUpload': {
			access: 'keeps the run',
			path: () => '/upload/deleted?/deleteUpload',
			request: ({ uploadPublicId: id }) => form({ id }),
			ok: 303
		},
		'POST ?/restoreUpload': {
			access: 'keeps the run',
			path: () => '/upload/deleted?/restoreUpload',
			request: ({ uploadPublicId: id }) => form({ id }),
			ok: 200
		},
		'POST ?/restoreRun': {
			access: 'keeps the run',
			path: () => '/upload/deleted?/restoreRun',
			request: ({ runPublicId: id }) => form({ id }),
			ok: 200
		}
	},
	'/(app)/runs/check': {
		// Runs that are not the reader's to change are left out.
		GET: { access: 'signed in', path: ({ runPublicId }) => `/runs/check?runs=${runPublicId}`, ok: 200 },
		'POST ?/save': {
			access: 'keeps the run',
			path: () => '/runs/check?/save',
			request: ({ runPublicId: id, layoutPublicId: layout }) => form({ id, layout, startedAt: '', car: '' }),
			ok: 200
		}
	},
	'/(app)/settings': {
		GET: { access: 'signed in', path: () => '/settings', ok: 200 },
		'POST ?/profile': {
			access: 'signed in',
			path: () => '/settings?/profile',
			request: () => form({ name: '', theme: 'dark', speedUnit: 'kmh' }),
			ok: 400
		},
		'POST ?/makeToken': {
			access: 'signed in',
			path: () => '/settings?/makeToken',
			request: () => form({ name: 'a script', scopes: 'laps:read', days: '30' }),
			ok: 200
		},
		// A sign-in or token that is not one's own reads like one that never was.
		'POST ?/endSignIn': {
			access: 'signed in',
			path: () => '/settings?/endSignIn',
			request: ({ runPublicId: id }) => form({ id }),
			ok: 404
		},
		'POST ?/revokeToken': {
			access: 'signed in',
			path: () => '/settings?/revokeToken',
			request: ({ runPublicId: id }) => form({ id }),
			ok: 404
		},
		'POST ?/endOthers': { access: 'signed in', path: () => '/settings?/endOthers', request: () => form({}), ok: 303 }
	},
	'/api/v1/openapi.json': { GET: { access: 'everybody', path: () => '/api/v1/openapi.json', ok: 200 } },
	'/api/v1/uploads': {
		GET: { access: 'signed in', scope: 'laps:read', path: () => '/api/v1/uploads', ok: 200 },
		PUT: {
			access: 'signed in',
			scope: 'uploads:write',
			path: () => '/api/v1/uploads?name=a.csv',
			// Each time another file: one that was here before is answered otherwise.
			request: () => ({ method: 'PUT', body: new TextEncoder().encode(randomUUID()) }),
			ok: 202
		}
	},
	'/api/v1/uploads/resumable': {
		POST: {
			access: 'signed in',
			scope: 'uploads:write',
			path: () => '/api/v1/uploads/resumable',
			request: () => ({ method: 'POST', headers: { 'tus-resumable': '1.0.0', 'upload-length': '10' } }),
			ok: 201
		}
	},
	'/api/v1/uploads/resumable/[upload]': {
		HEAD: { ...piece('HEAD'), ok: 200 },
		PATCH: { ...piece('PATCH'), ok: 204 },
		DELETE: { ...piece('DELETE'), ok: 204 }
	},
	'/api/v1/events': { GET: { access: 'signed in', scope: 'laps:read', path: () => '/api/v1/events', ok: 200 } },
	'/api/v1/uploads/[upload]': {
		GET: {
			access: 'keeps the run',
			scope: 'laps:read',
			path: ({ uploadPublicId }) => `/api/v1/uploads/${uploadPublicId}`,
			ok: 200
		},
		DELETE: {
			access: 'keeps the run',
			scope: 'uploads:write',
			path: ({ uploadPublicId }) => `/api/v1/uploads/${uploadPublicId}`,
			request: () => ({ method: 'DELETE' }),
			ok: 204
		}
	},
	'/api/v1/uploads/[upload]/restore': {
		POST: {
			access: 'keeps the run',
			scope: 'uploads:write',
			path: ({ uploadPublicId }) => `/api/v1/uploads/${uploadPublicId}/restore`,
			request: () => ({ method: 'POST' }),
			ok: 200
		}
	},
	'/api/v1/uploads/[upload]/again': {
		POST: {
			access: 'keeps the run',
			scope: 'uploads:write',
			path: ({ uploadPublicId }) => `/api/v1/uploads/${uploadPublicId}/again`,
			request: () => ({ method: 'POST' }),
			ok: 202
		}
	},
	'/api/v1/uploads/[upload]/file': {
		GET: {
			access: 'keeps the run',
			scope: 'laps:read',
			path: ({ uploadPublicId }) => `/api/v1/uploads/${uploadPublicId}/file`,
			ok: 200
		}
	},
	'/api/v1/uploads/[upload]/mapping': {
		PUT: {
			access: 'keeps the run',
			scope: 'uploads:write',
			path: ({ uploadPublicId }) => `/api/v1/uploads/${uploadPublicId}/mapping`,
			request: () => json('PUT', { mapping: null }),
			ok: 202
		},
		POST: {
			access: 'keeps the run',
			scope: 'uploads:write',
			path: ({ uploadPublicId }) => `/api/v1/uploads/${uploadPublicId}/mapping`,
			request: () => json('POST', { mapping: null, remember: 'no' }),
			ok: 202
		},
		DELETE: {
			access: 'keeps the run',
			scope: 'uploads:write',
			path: ({ uploadPublicId }) => `/api/v1/uploads/${uploadPublicId}/mapping`,
			request: () => ({ method: 'DELETE' }),
			ok: 204
		}
	},
	'/api/v1/runs': { GET: { access: 'signed in', scope: 'laps:read', path: () => '/api/v1/runs', ok: 200 } },
	'/api/v1/runs/[run]': {
		GET: { access: 'reads the run', scope: 'laps:read', path: (own) => `/api/v1${RUN(own)}`, ok: 200 },
		PATCH: {
			access: 'keeps the run',
			scope: 'runs:write',
			path: (own) => `/api/v1${RUN(own)}`,
			request: () => json('PATCH', { conditions: 'wet' }),
			ok: 200
		},
		DELETE: {
			access: 'keeps the run',
			scope: 'runs:write',
			path: (own) => `/api/v1${RUN(own)}`,
			request: () => ({ method: 'DELETE' }),
			ok: 204
		}
	},
	'/api/v1/runs/[run]/restore': {
		POST: {
			access: 'keeps the run',
			scope: 'runs:write',
			path: (own) => `/api/v1${RUN(own)}/restore`,
			request: () => ({ method: 'POST' }),
			ok: 200
		}
	},
	'/api/v1/laps/[lap]/trace': {
		GET: {
			access: 'reads the run',
			scope: 'laps:read',
			path: ({ lapPublicIds }) => `/api/v1/laps/${lapPublicIds[0]}/trace?channels=speedKmh`,
			ok: 200
		}
	},
	'/api/v1/compare/[lap]/[reference]': {
		GET: { access: 'reads the run', scope: 'laps:read', path: (own) => `/api/v1/compare/${pair(own)}`, ok: 200 }
	},
	'/api/v1/layouts/[layout]/corner-map': {
		GET: {
			access: 'keeps the run',
			scope: 'laps:read',
			path: ({ layoutPublicId }) => `/api/v1/layouts/${layoutPublicId}/corner-map`,
			ok: 200
		},
		POST: {
			access: 'keeps the run',
			scope: 'runs:write',
			path: ({ layoutPublicId }) => `/api/v1/layouts/${layoutPublicId}/corner-map`,
			request: ({ cornerPublicId }) =>
				json('POST', {
					basedOn: 1,
					edits: [{ kind: 'unnumber', corner: cornerPublicId }],
					preview: true
				}),
			ok: 200
		}
	},
	'/(app)/in-tray': {
		GET: { access: 'signed in', path: () => '/in-tray', ok: 200 },
		...Object.fromEntries(
			(['close', 'reopen', 'promise'] as const).map((action): [string, Entry] => [
				`POST ?/${action}`,
				{
					access: 'reads the run',
					path: () => `/in-tray?/${action}`,
					request: ({ runPublicId: run }) => form({ run, by: '2026-06-01' }),
					ok: 200
				}
			])
		),
		'POST ?/draft': {
			access: 'reads the run',
			path: () => '/in-tray?/draft',
			request: ({ runPublicId: run }) => form({ run }),
			ok: 303
		}
	},
	'/(app)/focus': {
		GET: { access: 'knows the driver', path: (own) => `/focus?of=${ownerOf(own)}`, ok: 200 },
		'POST ?/state': {
			access: 'answers for the focus',
			path: () => '/focus?/state',
			request: (own) => form({ focus: coached(own).focus, state: 'met' }),
			ok: 200
		}
	},
	'/(app)/debriefs': { GET: { access: 'signed in', path: () => '/debriefs', ok: 200 } },
	'/(app)/debriefs/[debrief]': {
		GET: { access: 'reads the debrief', path: (own) => `/debriefs/${coached(own).sent}`, ok: 200 }
	},
	'/(app)/debriefs/phrases': {
		GET: { access: 'signed in', path: () => '/debriefs/phrases', ok: 200 },
		'POST ?/keep': {
			access: 'signed in',
			path: () => '/debriefs/phrases?/keep',
			request: () => form({ code: '', body: '' }),
			ok: 400
		},
		'POST ?/drop': {
			access: 'signed in',
			path: () => '/debriefs/phrases?/drop',
			request: ({ runPublicId: id }) => form({ id }),
			ok: 404
		}
	},
	'/d/[token]': { GET: { access: 'everybody', path: (own) => coached(own).link, ok: 200 } },
	'/api/v1/notes': {
		GET: {
			access: 'coaches on the layout',
			scope: 'laps:read',
			path: ({ layoutPublicId }) => `/api/v1/notes?layout=${layoutPublicId}`,
			ok: 200
		},
		POST: {
			access: 'coaches on the layout',
			scope: 'runs:write',
			path: () => '/api/v1/notes',
			request: (own) =>
				json('POST', { ...NOTE, layout: own.layoutPublicId, driver: ownerOf(own), corner: own.cornerPublicId }),
			ok: 201
		}
	},
	'/api/v1/notes/[note]': {
		GET: { access: 'reads the note', scope: 'laps:read', path: (own) => `/api/v1/notes/${coached(own).note}`, ok: 200 },
		PATCH: {
			access: 'writes the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/notes/${coached(own).note}`,
			request: () => json('PATCH', { ...NOTE, corner: null, revision: 1 }),
			ok: 200
		},
		DELETE: {
			access: 'writes the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/notes/${coached(own).note}`,
			request: () => ({ method: 'DELETE' }),
			ok: 204
		}
	},
	'/api/v1/notes/[note]/restore': {
		POST: {
			access: 'writes the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/notes/${coached(own).note}/restore`,
			request: () => ({ method: 'POST' }),
			ok: 200
		}
	},
	'/api/v1/notes/[note]/replies': {
		POST: {
			access: 'reads the note',
			scope: 'runs:write',
			path: (own) => `/api/v1/notes/${coached(own).note}/replies`,
			request: () => json('POST', { body: 'I felt that.' }),
			ok: 201
		}
	},
	'/api/v1/focus': {
		GET: {
			access: 'knows the driver',
			scope: 'laps:read',
			path: (own) => `/api/v1/focus?driver=${ownerOf(own)}`,
			ok: 200
		},
		POST: {
			access: 'coaches on the layout',
			scope: 'runs:write',
			path: () => '/api/v1/focus',
			request: (own) =>
				json('POST', {
					driver: ownerOf(own),
					layout: own.layoutPublicId,
					car: null,
					corner: own.cornerPublicId,
					target: TARGET
				}),
			ok: 201
		}
	},
	'/api/v1/focus/[focus]': {
		GET: {
			access: 'reads the note',
			scope: 'laps:read',
			path: (own) => `/api/v1/focus/${coached(own).focus}`,
			ok: 200
		},
		PATCH: {
			access: 'answers for the focus',
			scope: 'runs:write',
			path: (own) => `/api/v1/focus/${coached(own).focus}`,
			request: () => json('PATCH', { state: 'dropped' }),
			ok: 200
		}
	},
	'/api/v1/debriefs': {
		GET: { access: 'signed in', scope: 'laps:read', path: () => '/api/v1/debriefs', ok: 200 },
		POST: {
			access: 'reads the run',
			scope: 'runs:write',
			path: () => '/api/v1/debriefs',
			request: ({ runPublicId: run }) => json('POST', { run }),
			ok: 201
		}
	},
	'/api/v1/debriefs/[debrief]': {
		GET: {
			access: 'writes the debrief',
			scope: 'laps:read',
			path: (own) => `/api/v1/debriefs/${coached(own).draft}`,
			ok: 200
		},
		PUT: {
			access: 'writes the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/debriefs/${coached(own).draft}`,
			request: () => json('PUT', { revision: 1, content: CONTENT }),
			ok: 200
		},
		DELETE: {
			access: 'writes the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/debriefs/${coached(own).draft}`,
			request: () => ({ method: 'DELETE' }),
			ok: 204
		}
	},
	'/api/v1/debriefs/[debrief]/restore': {
		POST: {
			access: 'writes the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/debriefs/${coached(own).draft}/restore`,
			request: () => ({ method: 'POST' }),
			ok: 200
		}
	},
	'/api/v1/debriefs/[debrief]/send': {
		POST: {
			access: 'writes the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/debriefs/${coached(own).draft}/send`,
			request: () => json('POST', { revision: 1 }),
			ok: 200
		}
	},
	'/api/v1/debriefs/[debrief]/read': {
		POST: {
			access: 'reads the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/debriefs/${coached(own).sent}/read`,
			request: () => ({ method: 'POST' }),
			ok: 204
		}
	},
	'/api/v1/debriefs/[debrief]/ticks': {
		PUT: {
			access: 'is the driver',
			scope: 'runs:write',
			path: (own) => `/api/v1/debriefs/${coached(own).sent}/ticks`,
			request: () => json('PUT', { item: 'task-1', ticked: true }),
			ok: 200
		}
	},
	'/api/v1/debriefs/[debrief]/replies': {
		POST: {
			access: 'reads the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/debriefs/${coached(own).sent}/replies`,
			request: () => json('POST', { body: 'Tried it.' }),
			ok: 201
		}
	},
	'/api/v1/debriefs/[debrief]/links': {
		POST: {
			access: 'reads the debrief',
			scope: 'runs:write',
			path: (own) => `/api/v1/debriefs/${coached(own).sent}/links`,
			request: () => json('POST', { days: 7 }),
			ok: 201
		}
	},
	'/api/v1/debriefs/[debrief]/links/[link]': {
		DELETE: {
			access: 'is the driver',
			scope: 'runs:write',
			path: (own) => `/api/v1/debriefs/${coached(own).sent}/links/${coached(own).linkId}`,
			request: () => ({ method: 'DELETE' }),
			ok: 204
		}
	},
	'/api/v1/layouts/[layout]/names': {
		PATCH: {
			access: 'keeps the run',
			scope: 'runs:write',
			path: ({ layoutPublicId }) => `/api/v1/layouts/${layoutPublicId}/names`,
			request: ({ cornerPublicId }) =>
				json('PATCH', { circuitName: 'Vallmere Park', corners: { [cornerPublicId]: 'Fernside' } }),
			ok: 204
		}
	}
};

/** Words of an owner that may stand in no answer to whom they did not admit. */
const SECRETS = { mira: 'Mira Tansley', foreign: 'Tomas Ruud' };

let mira: TestPerson;
let tomas: TestPerson;
let own: StoredRun;
let foreign: StoredRun;
const sends = new Map<Actor, () => Promise<RequestOptions>>();
const jars = new Map<Actor, CookieJar>();

async function jarOf(actor: Actor, who: TestPerson): Promise<CookieJar> {
	const jar = jars.get(actor) ?? (await signedIn(who));
	jars.set(actor, jar);
	return jar.copy();
}

beforeAll(async () => {
	const db = database();
	mira = await makePerson(SECRETS.mira, { isMinor: true });
	tomas = await makePerson(SECRETS.foreign);
	own = await storedRun(mira);
	foreign = await storedRun(tomas);
	const other = await storedRun(mira, own);
	const otherCircuit = await storedRun(mira);
	const [team, otherTeam] = [await makeOrganisation(), await makeOrganisation('Another team')];
	const [eventId]: number[] = await db('events').insert({
		public_id: newPublicId(),
		organisation_id: otherTeam,
		name: 'a weekend'
	});
	await db('runs').where({ id: own.runId }).update({ event_id: eventId });
	const tomorrow = new Date(Date.now() + 86_400_000);
	const person = async (actor: Actor, prepare: (who: TestPerson) => Promise<unknown> = async () => {}) => {
		const who = await makePerson(actor);
		await prepare(who);
		sends.set(actor, async () => ({ jar: await jarOf(actor, who) }));
	};
	sends.set('nobody', async () => ({ jar: new CookieJar() }));
	sends.set('owner', async () => ({ jar: await jarOf('owner', mira) }));
	const token = async (actor: Actor, scopes: Scope[], expiresAt: Date | null = null) => {
		const headers = await bearer(mira, scopes, expiresAt);
		sends.set(actor, async () => ({ headers, origin: null }));
	};
	await token("owner's token to read", ['laps:read']);
	await token("owner's token to upload", ['uploads:write']);
	await token("owner's token to edit", ['runs:write', 'laps:read']);
	await token("owner's expired token", ['laps:read'], new Date(Date.now() - 1000));
	await person('guardian', (who) => addGuardian(who, mira));
	await person('coach with all', async (to) => {
		await makeGrant(mira, { to });
		await writeCoaching(own, mira, to);
	});
	const stranger = await makePerson('a coach of others');
	await makeGrant(tomas, { to: stranger });
	await writeCoaching(foreign, tomas, stranger);
	await person('coach with the run', (to) => makeGrant(mira, { to, scope: 'run', runId: own.runId }));
	await person('coach with the circuit', (to) => makeGrant(mira, { to, scope: 'circuit', circuitId: own.circuitId }));
	await person('coach with the event', (to) => makeGrant(mira, { to, scope: 'event', eventId }));
	await person('coach with another run', (to) => makeGrant(mira, { to, scope: 'run', runId: other.runId }));
	await person('coach with another circuit', (to) =>
		makeGrant(mira, { to, scope: 'circuit', circuitId: otherCircuit.circuitId })
	);
	await person('coach whose grant was revoked', (to) => makeGrant(mira, { to, revokedAt: new Date() }));
	await person('coach whose grant begins tomorrow', (to) => makeGrant(mira, { to, fromAt: tomorrow }));
	await person('manager of the team', (who) => addMember(team, who, 'manager'));
	await person('coach of the team', (who) => addMember(team, who, 'coach'));
	await person('admin of the team', (who) => addMember(team, who, 'admin'));
	await person('driver of the team', (who) => addMember(team, who, 'driver'));
	await person('manager of another team', (who) => addMember(otherTeam, who, 'manager'));
	await person('manager who left the team', async (who) => {
		await addMember(team, who, 'manager');
		await db('memberships').where({ person_id: who.id }).update({ ended_at: new Date() });
	});
	await person('other driver');
	await person('site operator', async (who) => db('site_operators').insert({ person_id: who.id }));
	await makeGrant(mira, { to: team });
	await prepare();
}, 120_000);

afterAll(async () => {
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

const isToken = (actor: Actor) => actor.includes('token');
const isIn = (actor: Actor) => actor !== 'nobody' && actor !== "owner's expired token";

/** The status that an actor must see at Mira's data. */
function expected(actor: Actor, routeId: string, operation: string, entry: Entry): number {
	const isApi = routeId.startsWith('/api/');
	if (entry.access === 'everybody')
		return isIn(actor) && !isToken(actor) && routeId === '/sign-in' && operation === 'GET' ? 303 : entry.ok;
	if (!isIn(actor)) return isApi ? 401 : 303;
	if (isToken(actor)) {
		if (!isApi) return 303;
		const scopes = { "owner's token to read": ['laps:read'], "owner's token to upload": ['uploads:write'] }[
			actor as string
		] ?? ['runs:write', 'laps:read'];
		if (!scopes.includes(entry.scope ?? '')) return 403;
		return LET_IN[entry.access]?.includes('owner') === false ? 404 : entry.ok;
	}
	if (entry.access === 'signed in') return entry.ok;
	if (entry.access === 'runs the site') return actor === 'site operator' ? entry.ok : 404;
	return LET_IN[entry.access]?.includes(actor) ? entry.ok : 404;
}

/** An event stream never ends by itself: its first piece. */
async function textOf(response: Response): Promise<string> {
	if (response.headers.get('content-type') !== 'text/event-stream') return await response.text();
	const reader = response.body?.getReader();
	const { value } = (await reader?.read()) ?? {};
	await reader?.cancel();
	return new TextDecoder().decode(value);
}

async function send(actor: Actor, entry: Entry, at: StoredRun): Promise<Response> {
	const who = await sends.get(actor)?.();
	const request = entry.request?.(at) ?? {};
	return await testRequest(entry.path(at), { ...request, ...who, headers: { ...request.headers, ...who?.headers } });
}

/** What is taken away by a test comes back for the next. */
async function restore(actor: Actor, entry: Entry): Promise<void> {
	if (entry.endsSignIn) jars.delete(actor);
	if (/^(coaches|reads the (note|debrief)|answers|writes|is the)/.test(entry.access)) await restoreCoaching();
	if (entry.access !== 'keeps the run') return;
	const db = database();
	await db('runs').whereIn('id', [own.runId, foreign.runId]).update({ deleted_at: null });
	await db('uploads').whereIn('id', [own.uploadId, foreign.uploadId]).update({ deleted_at: null });
	await prepare();
}

/** What a coach wrote on each run, as it was before a request changed it. */
async function restoreCoaching(): Promise<void> {
	const db = database();
	for (const { keys } of coachedRuns.values()) {
		await db('zone_notes').where({ id: keys.note }).update({ revision: 1, deleted_at: null, body: NOTE.body });
		await db('zone_note_revisions').where({ zone_note_id: keys.note }).delete();
		await db('focus_points').where({ id: keys.focus }).update({ state: 'open', closed_at: null });
		await db('sent_debriefs').where({ debrief_id: keys.draft }).delete();
		await db('debriefs').where({ id: keys.draft }).update({ revision: 1, deleted_at: null, sent_at: null });
		await db('debrief_links').where({ id: keys.link }).update({ revoked_at: null });
		await db('debrief_links').whereNot({ id: keys.link }).where({ sent_debrief_id: keys.sent }).delete();
	}
}

/** A note, a focus, a draft and a sent debrief with a link, by one coach on one run. */
async function writeCoaching(at: StoredRun, driver: TestPerson, author: TestPerson): Promise<void> {
	const db = database();
	owners.set(at.runId, driver.publicId);
	const id = () => newPublicId();
	const ids = { note: id(), focus: id(), draft: id(), sent: id(), link: id() };
	const corner = await db('corners').where({ layout_id: at.layoutId }).orderBy('id').first('id');
	const on = { driver_id: driver.id, layout_id: at.layoutId, corner_id: corner.id };
	const target = JSON.stringify(TARGET);
	const [note]: number[] = await db('zone_notes').insert({
		...on,
		public_id: ids.note,
		author_id: author.id,
		path_version: 1,
		start_m: NOTE.startM,
		end_m: NOTE.endM,
		body: NOTE.body,
		target
	});
	const [focus]: number[] = await db('focus_points').insert({ ...on, public_id: ids.focus, set_by: author.id, target });
	const [reference, lap] = at.lapIds;
	const debrief = {
		author_id: author.id,
		driver_id: driver.id,
		run_id: at.runId,
		lap_id: lap,
		reference_lap_id: reference,
		content: JSON.stringify(CONTENT)
	};
	const [draft]: number[] = await db('debriefs').insert({ ...debrief, public_id: ids.draft });
	const [sentDebrief]: number[] = await db('debriefs').insert({
		...debrief,
		public_id: ids.sent,
		sent_at: new Date()
	});
	const facts = {
		coach: author.name,
		driver: driver.name,
		where: 'Vallmere Park',
		gapS: 0.1,
		lap: 'lap 2',
		reference: 'lap 1',
		ledger: [],
		plan: null,
		corners: [],
		cautions: []
	};
	const [sent]: number[] = await db('sent_debriefs').insert({
		debrief_id: sentDebrief,
		document: JSON.stringify({ content: CONTENT, facts })
	});
	const token = newSecret();
	const [link]: number[] = await db('debrief_links').insert({
		public_id: ids.link,
		sent_debrief_id: sent,
		token_hash: hashToken(token),
		created_by: driver.id,
		expires_at: new Date(Date.now() + 86_400_000)
	});
	coachedRuns.set(at.runId, {
		note: encodePublicId(ids.note),
		focus: encodePublicId(ids.focus),
		draft: encodePublicId(ids.draft),
		sent: encodePublicId(ids.sent),
		link: `/d/${token}`,
		linkId: encodePublicId(ids.link),
		keys: { note, focus, draft, sent, link }
	});
}

/** What one request takes away or goes on with, made anew: an unfinished upload, an answer that is remembered. */
async function prepare(): Promise<void> {
	const db = database();
	for (const [at, who] of [
		[own, mira],
		[foreign, tomas]
	] as const) {
		const publicId = newPublicId();
		const id = encodePublicId(publicId);
		pieces.set(at.runId, id);
		await db('uploads').insert({
			public_id: publicId,
			owner_id: who.id,
			file_name: 'pieces.csv',
			storage_key: `${id.slice(-2)}/${id}`,
			size_bytes: 10,
			is_resumable: true,
			state: 'receiving'
		});
		await mkdir(dirname(partPath(id)), { recursive: true });
		await writeFile(partPath(id), 'abc');
		const headerKey = Buffer.alloc(32, 7);
		await db('uploads').where({ id: at.uploadId }).update({ header_key: headerKey });
		await db('remembered_mappings')
			.insert({ person_id: who.id, header_key: headerKey, mapping: JSON.stringify({ columns: [] }) })
			.onConflict()
			.ignore();
	}
}

describe('the matrix', () => {
	it('has an entry for every route and action there is, and none for what is gone', async () => {
		const there = Object.fromEntries(
			await Promise.all(ROUTES.map(async (route) => [route.id, (await operationsOf(route)).sort()]))
		);
		const entered = Object.fromEntries(
			Object.entries(ENTRIES).map(([id, entries]) => [id, Object.keys(entries).sort()])
		);
		expect(entered).toEqual(there);
	});

	it('knows every operation of the API that its document describes, and the other way round', () => {
		const described = Object.entries(OPERATIONS).flatMap(([path, methods]) =>
			Object.entries(methods).map(([method, { scope }]) => `${method.toUpperCase()} ${path} ${scope}`)
		);
		const entered = Object.entries(ENTRIES)
			.filter(([id]) => id.startsWith('/api/') && id !== '/api/v1/openapi.json')
			.flatMap(([id, entries]) =>
				Object.entries(entries).map(
					([method, { scope }]) => `${method} ${id.replaceAll('[', '{').replaceAll(']', '}')} ${scope}`
				)
			);
		expect(entered.sort()).toEqual(described.sort());
	});
});

describe.each(
	Object.entries(ENTRIES).flatMap(([id, entries]) =>
		Object.entries(entries).map(([operation, entry]) => ({ id, operation, entry }))
	)
)('$operation $id', ({ id, operation, entry }) => {
	it.each(ACTORS)("answers %s about Mira's data as it should, and about Tomas's never", async (actor) => {
		try {
			const response = await send(actor, entry, own);
			const text = await textOf(response);
			expect(response.status, text.slice(0, 300)).toBe(expected(actor, id, operation, entry));
			if (id.startsWith('/api/') && response.status >= 400) {
				expect(response.headers.get('content-type')).toBe('application/problem+json');
			}
			if (response.status === 404) expect(text).not.toContain(SECRETS.mira);
			expect(text).not.toContain(SECRETS.foreign);
			if (entry.access in LET_IN) {
				const other = await send(actor, entry, foreign);
				expect([303, 401, 403, 404]).toContain(other.status);
				if (isIn(actor) && !isToken(actor)) expect(other.status).toBe(404);
				expect(await other.text()).not.toContain(SECRETS.foreign);
			}
		} finally {
			await restore(actor, entry);
		}
	});
});

describe('lists', () => {
	it.each(ACTORS.filter((actor) => isIn(actor) && !isToken(actor)))(
		'show %s exactly the runs that one by one open to them',
		async (actor) => {
			const runs = await (await send(actor, ENTRIES['/api/v1/runs'].GET, own)).text();
			expect(runs.includes(own.runPublicId)).toBe(READERS.includes(actor));
			expect(runs).not.toContain(foreign.runPublicId);
			const notebook = await testRequest(`/notebook?of=${mira.publicId}`, await sends.get(actor)?.());
			const mayKnow = [...READERS, 'coach with another run', 'coach with another circuit'].includes(actor);
			expect(notebook.status).toBe(mayKnow ? 200 : 404);
			if (!READERS.includes(actor)) expect(await notebook.text()).not.toContain(own.runPublicId);
		}
	);

	it('lay no lap of a stranger beside one’s own as a reference', async () => {
		const page = await (await send('owner', ENTRIES['/api/v1/runs/[run]'].GET, own)).text();
		expect(page).not.toContain(foreign.lapPublicIds[0]);
	});
});

describe('a grant that is taken back', () => {
	it('closes at once what it had opened, also for who holds the page open', async () => {
		const coach = await makePerson('Rhea Calloway');
		const grantId = await makeGrant(mira, { to: coach });
		const jar = await signedIn(coach);
		const path = ENTRIES['/api/v1/laps/[lap]/trace'].GET.path(own);
		const first = await testRequest(path, { jar });
		expect(first.status).toBe(200);
		await database()('grants').where({ id: grantId }).update({ revoked_at: new Date() });
		const etag = first.headers.get('etag') ?? '';
		expect((await testRequest(path, { jar, headers: { 'if-none-match': etag } })).status).toBe(404);
	});
});

describe('an id that nobody has', () => {
	it.each(['0'.repeat(26), 'zzzz', '../../etc/passwd', '%00', "' OR 1=1 --"])(
		'reads like one that is refused: %s',
		async (id) => {
			const jar = await signedIn(mira);
			const refused = await testRequest(`/api/v1/runs/${foreign.runPublicId}`, { jar });
			const absent = await testRequest(`/api/v1/runs/${encodeURIComponent(id)}`, { jar });
			expect(absent.status).toBe(404);
			expect(await absent.json()).toEqual(await refused.json());
		}
	);
});
