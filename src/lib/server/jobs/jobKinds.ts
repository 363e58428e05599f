import { z } from 'zod';

/** Everything that is done outside a request, with what it needs to know. */
export const jobPayloadSchemas = {
	/** read, analyse and store an upload; an older revision than the upload's stores nothing */
	importRun: z.object({
		uploadId: z.number().int(),
		revision: z.number().int(),
		/** `version`: nobody asked; the analysis has become better. What cannot be read again stays as it was. */
		cause: z.enum(['person', 'version']).optional()
	}),
	/** queue files that an earlier version of the analysis read, a few at a time */
	reanalyse: z.object({}),
	/** send a letter of the mail log */
	sendMail: z.object({ mailId: z.number().int() }),
	/** write the letter by which a person chooses a new password; null where nobody has the address that was given */
	writeReset: z.object({ personId: z.number().int().nullable() }),
	/** cut all stored laps of a layout by a version of its corner map, which counts from then on */
	recutLayout: z.object({ layoutId: z.number().int(), mapVersion: z.number().int() }),
	/** tidy up: writes that never ended, counters and sessions that ran out */
	sweep: z.object({})
};

export type JobKind = keyof typeof jobPayloadSchemas;
export type JobPayload<Kind extends JobKind> = z.infer<(typeof jobPayloadSchemas)[Kind]>;
export const JOB_KINDS: readonly JobKind[] = [
	'importRun',
	'reanalyse',
	'recutLayout',
	'sendMail',
	'sweep',
	'writeReset'
];
