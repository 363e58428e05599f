import { z } from 'zod';
import { errorCodeSchema } from './codes.ts';

/** What a token may be made for. */
export const tokenScopeSchema = z.enum(['laps:read', 'uploads:write']);
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
	/** to quote when asking for help */
	errorId: z.string().optional()
});
export type Problem = z.infer<typeof problemSchema>;
