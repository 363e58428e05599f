import { z } from 'zod';
import { columnMappingSchema } from './columnMapping.ts';
import { errorCodeSchema } from './codes.ts';
import { conditionsSchema, intentSchema, placeSchema, publicIdSchema, rememberSchema } from './views.ts';

/** What a token may be made for. */
export const tokenScopeSchema = z.enum(['laps:read', 'uploads:write', 'runs:write']);
export type TokenScope = z.infer<typeof tokenScopeSchema>;

/** Why a request is not answered; codes of the core travel unchanged. */
export const problemCodeSchema = z.union([
	errorCodeSchema,
	z.enum([
		'sign_in_required',
		'scope_missing',
		'not_found',
		'foreign_origin',
		'length_required',
		'body_too_large',
		'invalid_input',
		'method_not_allowed',
		'throttled',
		'conflict',
		'different_layout',
		'upload_interrupted',
		'unavailable'
	])
]);
export type ProblemCode = z.infer<typeof problemCodeSchema>;

/** RFC 9457, with the code of the core beside it. */
export const problemSchema = z.object({
	type: z.string(),
	title: z.string(),
	status: z.number().int(),
	detail: z.string(),
	code: problemCodeSchema,
	/** 1-based line of the file, where there is one */
	row: z.number().int().nullable().optional(),
	column: z.string().nullable().optional(),
	/** what to do next */
	remedy: z.string().optional(),
	/** which fields of the input are wrong */
	issues: z.record(z.string(), z.array(z.string())).optional(),
	/** with 409, where somebody else wrote in between: what stands now and what was to be written; nothing was overwritten */
	conflict: z.object({ revision: z.number().int(), theirs: z.unknown(), yours: z.unknown() }).optional(),
	/** to quote when asking for help */
	errorId: z.string().optional()
});
export type Problem = z.infer<typeof problemSchema>;

const emptyIsNull = (text: string) => (text === '' ? null : text);

/** `PUT /api/v1/uploads`: the query; the body is the file. */
export const uploadQuerySchema = z.object({ name: z.string().min(1).max(1000) });

/** `PUT` and `POST /api/v1/uploads/{id}/mapping`: how the file is to be read; null, as the product understands it by itself. */
export const mappingInputSchema = z.object({
	mapping: columnMappingSchema.nullable(),
	/** for whom it is kept, for files with the same header; `no` changes nothing that was kept before */
	remember: rememberSchema.optional(),
	/** with `organisation`; may be left out by who is in one only */
	organisation: publicIdSchema.optional()
});
export type MappingInput = z.infer<typeof mappingInputSchema>;

/** `GET /api/v1/runs`: the query. */
export const runsQuerySchema = z.object({
	cursor: z.string().max(200).optional(),
	limit: z.coerce.number().int().min(1).max(100).optional(),
	driver: publicIdSchema.optional(),
	layout: publicIdSchema.optional()
});

/** What a person says of a run; a field that is absent stays as it is. */
export const runDescriptionSchema = z.object({
	place: placeSchema.optional(),
	conditions: conditionsSchema.optional(),
	intent: intentSchema.optional(),
	/** name of the car; empty or null for none */
	car: z.string().trim().max(120, 'a name has at most 120 characters').transform(emptyIsNull).nullable().optional(),
	tyreSet: z.string().trim().max(60, 'a name has at most 60 characters').transform(emptyIsNull).nullable().optional(),
	/** kg at the start of the run */
	fuelKg: z.number('write the fuel in kg, as a number').min(0).max(2000).nullable().optional(),
	startedAt: z.iso.datetime({ offset: true }).nullable().optional(),
	/** the layout that it was driven on, of those that the viewer may see; the file is read again */
	layout: publicIdSchema.optional()
});
export type RunDescription = z.infer<typeof runDescriptionSchema>;

const nameSchema = z.string().trim().min(1, 'write a name').max(120, 'a name has at most 120 characters');

/** What people call a circuit, its layout and its corners; a name that is absent stays as it is. */
export const layoutNamesSchema = z.object({
	circuitName: nameSchema.optional(),
	layoutName: nameSchema.optional(),
	/** by id of the corner; empty or null for none */
	corners: z
		.record(
			publicIdSchema,
			z.string().trim().max(60, 'a name has at most 60 characters').transform(emptyIsNull).nullable()
		)
		.optional()
});
export type LayoutNames = z.infer<typeof layoutNamesSchema>;

/** `GET /api/v1/laps/{id}/trace`: the query. */
export const traceQuerySchema = z
	.object({
		/** channels, with commas between; all when absent */
		channels: z
			.string()
			.max(400)
			.transform((text) => text.split(',').filter((name) => name !== ''))
			.optional(),
		/** `packed` is a third of the bytes; see the description of the frame */
		encoding: z.enum(['float', 'packed']).default('float'),
		/** stretch of the path, m from the line; the margin before and after the lap may be asked for */
		from: z.coerce.number().int().min(-1000).max(100_000).optional(),
		to: z.coerce.number().int().min(-1000).max(100_000).optional()
	})
	.refine(({ from, to }) => from === undefined || to === undefined || from < to, {
		message: 'from lies before to',
		path: ['to']
	});
