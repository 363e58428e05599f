import { z } from 'zod';
import {
	layoutNamesSchema,
	mappingInputSchema,
	problemSchema,
	runDescriptionSchema,
	runsQuerySchema,
	tokenScopeSchema,
	traceQuerySchema,
	uploadQuerySchema,
	type TokenScope
} from '../../schemas/api.ts';
import {
	debriefInputSchema,
	debriefListSchema,
	debriefSaveSchema,
	debriefSendSchema,
	debriefViewSchema,
	linkInputSchema,
	madeLinkSchema,
	savedSchema,
	tickInputSchema
} from '../../schemas/debrief.ts';
import {
	focusChangeSchema,
	focusInputSchema,
	focusListSchema,
	focusPointSchema,
	focusQuerySchema
} from '../../schemas/focus.ts';
import {
	notesQuerySchema,
	replyInputSchema,
	zoneNoteChangeSchema,
	zoneNoteDetailSchema,
	zoneNoteInputSchema,
	zoneNoteListSchema
} from '../../schemas/zoneNote.ts';
import { cornerMapAnswerSchema, cornerMapChangeSchema, cornerMapViewSchema } from '../../schemas/cornerMap.ts';
import {
	comparisonDocumentSchema,
	runListSchema,
	runViewSchema,
	uploadHeadSchema,
	uploadViewSchema
} from '../../schemas/views.ts';

interface Operation {
	summary: string;
	scope: TokenScope;
	query?: z.ZodType;
	body?: z.ZodType | 'file' | 'piece';
	/** status and what it carries; null for an answer without a body */
	answer: readonly [status: number, schema: z.ZodType | 'file' | 'frame' | 'events' | null];
}

type Method = 'get' | 'head' | 'put' | 'post' | 'patch' | 'delete';

/** Every operation of the API, by path; a test holds this list against the routes. */
export const OPERATIONS: Readonly<Record<string, Partial<Record<Method, Operation>>>> = {
	'/api/v1/uploads': {
		get: {
			summary: 'The last uploads',
			scope: 'laps:read',
			answer: [200, z.object({ uploads: z.array(uploadHeadSchema) })]
		},
		put: {
			summary: 'Hand over one raw file (CSV or TXT, may be gzip); it is kept and read as soon as a worker is free',
			scope: 'uploads:write',
			query: uploadQuerySchema,
			body: 'file',
			answer: [202, uploadHeadSchema]
		}
	},
	'/api/v1/uploads/resumable': {
		post: {
			summary:
				'Make an upload that goes on after a break (tus 1.0.0: Upload-Length, Upload-Metadata with filename); Location names it',
			scope: 'uploads:write',
			answer: [201, null]
		}
	},
	'/api/v1/uploads/resumable/{upload}': {
		head: { summary: 'How much of the file is here (tus 1.0.0)', scope: 'uploads:write', answer: [200, null] },
		patch: {
			summary:
				'The next piece (tus 1.0.0); after the last, Kerbnote-Upload names the upload, an earlier one for a file that was here before',
			scope: 'uploads:write',
			body: 'piece',
			answer: [204, null]
		},
		delete: { summary: 'Give an unfinished upload up (tus 1.0.0)', scope: 'uploads:write', answer: [204, null] }
	},
	'/api/v1/events': {
		get: {
			summary: 'What becomes of the uploads, as server-sent events: upload (a head), gone (an id), end',
			scope: 'laps:read',
			answer: [200, 'events']
		}
	},
	'/api/v1/uploads/{upload}': {
		get: {
			summary: 'How far an upload is, what was understood, and its runs',
			scope: 'laps:read',
			answer: [200, uploadViewSchema]
		},
		delete: {
			summary: 'Take an upload and its runs out of sight; it can be brought back for 30 days',
			scope: 'uploads:write',
			answer: [204, null]
		}
	},
	'/api/v1/uploads/{upload}/restore': {
		post: { summary: 'Bring a deleted upload back', scope: 'uploads:write', answer: [200, uploadHeadSchema] }
	},
	'/api/v1/uploads/{upload}/again': {
		post: { summary: 'Read and analyse the kept file again', scope: 'uploads:write', answer: [202, uploadHeadSchema] }
	},
	'/api/v1/uploads/{upload}/mapping': {
		put: {
			summary: 'Say how the file is to be read; it is read again',
			scope: 'uploads:write',
			body: mappingInputSchema,
			answer: [202, uploadHeadSchema]
		},
		post: {
			summary: 'Answer what the file was asked for; it is read again',
			scope: 'uploads:write',
			body: mappingInputSchema,
			answer: [202, uploadHeadSchema]
		},
		delete: {
			summary: 'Forget the answer that is kept for files with this header',
			scope: 'uploads:write',
			answer: [204, null]
		}
	},
	'/api/v1/uploads/{upload}/file': {
		get: { summary: 'The raw file, byte for byte', scope: 'laps:read', answer: [200, 'file'] }
	},
	'/api/v1/runs': {
		get: { summary: 'Runs, newest first', scope: 'laps:read', query: runsQuerySchema, answer: [200, runListSchema] }
	},
	'/api/v1/runs/{run}': {
		get: { summary: 'One run with its laps and corners', scope: 'laps:read', answer: [200, runViewSchema] },
		patch: { summary: 'Describe a run', scope: 'runs:write', body: runDescriptionSchema, answer: [200, runViewSchema] },
		delete: { summary: 'Take a run out of sight; its file stays', scope: 'runs:write', answer: [204, null] }
	},
	'/api/v1/runs/{run}/restore': {
		post: { summary: 'Bring a deleted run back', scope: 'runs:write', answer: [200, runViewSchema] }
	},
	'/api/v1/laps/{lap}/trace': {
		get: {
			summary: 'Columns of one lap on the 1 m grid of the path, binary',
			scope: 'laps:read',
			query: traceQuerySchema,
			answer: [200, 'frame']
		}
	},
	'/api/v1/compare/{lap}/{reference}': {
		get: { summary: 'Two laps laid on each other', scope: 'laps:read', answer: [200, comparisonDocumentSchema] }
	},
	'/api/v1/notes': {
		get: {
			summary: 'Zone notes on a layout',
			scope: 'laps:read',
			query: notesQuerySchema,
			answer: [200, zoneNoteListSchema]
		},
		post: {
			summary: 'Write a zone note',
			scope: 'runs:write',
			body: zoneNoteInputSchema,
			answer: [201, zoneNoteDetailSchema]
		}
	},
	'/api/v1/notes/{note}': {
		get: {
			summary: 'One zone note with its answers and history',
			scope: 'laps:read',
			answer: [200, zoneNoteDetailSchema]
		},
		patch: {
			summary: 'Change a zone note; 409 with both texts when somebody else changed it in between',
			scope: 'runs:write',
			body: zoneNoteChangeSchema,
			answer: [200, zoneNoteDetailSchema]
		},
		delete: {
			summary: 'Take a zone note out of sight; it can be brought back',
			scope: 'runs:write',
			answer: [204, null]
		}
	},
	'/api/v1/notes/{note}/restore': {
		post: { summary: 'Bring a deleted zone note back', scope: 'runs:write', answer: [200, zoneNoteDetailSchema] }
	},
	'/api/v1/notes/{note}/replies': {
		post: {
			summary: 'Answer a zone note',
			scope: 'runs:write',
			body: replyInputSchema,
			answer: [201, zoneNoteDetailSchema]
		}
	},
	'/api/v1/focus': {
		get: {
			summary: 'A driver’s focus points, each with the scores of later runs',
			scope: 'laps:read',
			query: focusQuerySchema,
			answer: [200, focusListSchema]
		},
		post: { summary: 'Open a focus', scope: 'runs:write', body: focusInputSchema, answer: [201, focusPointSchema] }
	},
	'/api/v1/focus/{focus}': {
		get: { summary: 'One focus with its scores', scope: 'laps:read', answer: [200, focusPointSchema] },
		patch: {
			summary: 'Close, drop or open a focus',
			scope: 'runs:write',
			body: focusChangeSchema,
			answer: [200, focusPointSchema]
		}
	},
	'/api/v1/debriefs': {
		get: { summary: 'Debriefs that one writes or received', scope: 'laps:read', answer: [200, debriefListSchema] },
		post: {
			summary: 'Draft a debrief on a run, or go on with the one that was not sent yet',
			scope: 'runs:write',
			body: debriefInputSchema,
			answer: [201, debriefViewSchema]
		}
	},
	'/api/v1/debriefs/{debrief}': {
		get: {
			summary: 'A debrief, as it is written or as it was sent',
			scope: 'laps:read',
			answer: [200, debriefViewSchema]
		},
		put: {
			summary: 'Save what is written; 409 with both texts when another window saved in between',
			scope: 'runs:write',
			body: debriefSaveSchema,
			answer: [200, savedSchema]
		},
		delete: { summary: 'Take a draft out of sight; it can be brought back', scope: 'runs:write', answer: [204, null] }
	},
	'/api/v1/debriefs/{debrief}/restore': {
		post: { summary: 'Bring a deleted draft back', scope: 'runs:write', answer: [200, debriefViewSchema] }
	},
	'/api/v1/debriefs/{debrief}/send': {
		post: {
			summary: 'Send a debrief; a second time changes nothing',
			scope: 'runs:write',
			body: debriefSendSchema,
			answer: [200, debriefViewSchema]
		}
	},
	'/api/v1/debriefs/{debrief}/read': {
		post: { summary: 'Say that the driver has it before them', scope: 'runs:write', answer: [204, null] }
	},
	'/api/v1/debriefs/{debrief}/ticks': {
		put: {
			summary: 'Tick what was tried',
			scope: 'runs:write',
			body: tickInputSchema,
			answer: [200, debriefViewSchema]
		}
	},
	'/api/v1/debriefs/{debrief}/replies': {
		post: { summary: 'Answer a debrief', scope: 'runs:write', body: replyInputSchema, answer: [201, debriefViewSchema] }
	},
	'/api/v1/debriefs/{debrief}/links': {
		post: {
			summary: 'Make a link that shows this debrief and nothing else; its path is told this once',
			scope: 'runs:write',
			body: linkInputSchema,
			answer: [201, madeLinkSchema]
		}
	},
	'/api/v1/debriefs/{debrief}/links/{link}': {
		delete: { summary: 'End a link', scope: 'runs:write', answer: [204, null] }
	},
	'/api/v1/layouts/{layout}/corner-map': {
		get: {
			summary: 'The corner map that counts, with kinks and versions',
			scope: 'laps:read',
			answer: [200, cornerMapViewSchema]
		},
		post: {
			summary:
				'Edit the corner map, make an earlier version count again, or preview either (200); 202: stored laps are being cut, and the new version counts once all are',
			scope: 'runs:write',
			body: cornerMapChangeSchema,
			answer: [202, cornerMapAnswerSchema]
		}
	},
	'/api/v1/layouts/{layout}/names': {
		patch: {
			summary: 'Name a circuit, its layout and its corners',
			scope: 'runs:write',
			body: layoutNamesSchema,
			answer: [204, null]
		}
	}
};

const FRAME = `Four bytes "KNT1"; the length of the header, 32 bits, little end first; the header, JSON padded with spaces:
lap, lengthM, fromM (s of the first entry), stepM 1, lapTimeS, columns (channel, unit, encoding, perUnit, count, byteOffset, byteLength).
Columns begin at multiples of eight bytes. float32 and float64 (time): little end first, NaN is a gap.
packed: varint count; varint 2 · gaps + (1 where numbers need more than 31 bits); for each gap varint entries since the last gap's
end, varint length; then for each entry outside gaps the zigzag varint of the second difference of value · perUnit.`;

/** The OpenAPI 3.1 document, out of the same schemas that check requests and type answers. */
export function openApiDocument(): Record<string, unknown> {
	const paths = Object.fromEntries(
		Object.entries(OPERATIONS).map(([path, methods]) => [
			path,
			Object.fromEntries(Object.entries(methods).map(([method, operation]) => [method, describe(path, operation)]))
		])
	);
	return {
		openapi: '3.1.0',
		info: {
			title: 'Kerbnote',
			version: '1',
			description:
				'Laps, corners and comparisons. Distances in m on the path, times in s, speeds in km/h; a positive difference is time lost.'
		},
		paths,
		components: {
			securitySchemes: {
				token: { type: 'http', scheme: 'bearer', description: `Scopes: ${tokenScopeSchema.options.join(', ')}` },
				signIn: { type: 'apiKey', in: 'cookie', name: 'kerbnote-session' }
			},
			schemas: { Problem: jsonSchema(problemSchema, 'output') },
			responses: {
				Problem: {
					description: 'What stopped the request (RFC 9457)',
					content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } }
				}
			}
		}
	};
}

function describe(
	path: string,
	{ summary, scope, query, body, answer: [status, schema] }: Operation
): Record<string, unknown> {
	return {
		summary,
		security: [{ token: [scope] }, { signIn: [] }],
		parameters: [...pathParameters(path), ...queryParameters(query)],
		...(body && { requestBody: { required: true, content: contentOf(body, 'input') } }),
		responses: {
			[status]: {
				description: schema === 'frame' ? FRAME : summary,
				...(schema && { content: contentOf(schema, 'output') })
			},
			default: { $ref: '#/components/responses/Problem' }
		}
	};
}

type Content = z.ZodType | 'file' | 'piece' | 'frame' | 'events';

function contentOf(schema: Content, side: 'input' | 'output'): Record<string, unknown> {
	if (schema === 'file') return { 'application/octet-stream': {} };
	if (schema === 'piece') return { 'application/offset+octet-stream': {} };
	if (schema === 'events') return { 'text/event-stream': {} };
	if (schema === 'frame') return { 'application/vnd.kerbnote.trace': {} };
	return { 'application/json': { schema: jsonSchema(schema, side) } };
}

function pathParameters(path: string): Record<string, unknown>[] {
	return [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => ({
		name,
		in: 'path',
		required: true,
		schema: { type: 'string', minLength: 26, maxLength: 26 }
	}));
}

function queryParameters(query: z.ZodType | undefined): Record<string, unknown>[] {
	if (!query) return [];
	const described = z.object({
		properties: z.record(z.string(), z.unknown()),
		required: z.array(z.string()).default([])
	});
	const { properties, required } = described.parse(jsonSchema(query, 'input'));
	return Object.entries(properties).map(([name, schema]) => ({
		name,
		in: 'query',
		required: required.includes(name),
		schema
	}));
}

function jsonSchema(schema: z.ZodType, io: 'input' | 'output'): unknown {
	const described = Object.entries(z.toJSONSchema(schema, { io, unrepresentable: 'any' }));
	// OpenAPI 3.1 names the dialect once for the whole document.
	return Object.fromEntries(described.filter(([name]) => name !== '$schema'));
}
