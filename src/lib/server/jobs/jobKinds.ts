import { z } from 'zod';

/** Everything that is done outside a request, with what it needs to know. */
export const jobPayloadSchemas = {
	/** read, analyse and store an upload; an older revision than the upload's stores nothing */
	importRun: z.object({ uploadId: z.number().int(), revision: z.number().int() }),
	/** tidy up: writes that never ended, counters and sessions that ran out */
	sweep: z.object({})
};

export type JobKind = keyof typeof jobPayloadSchemas;
export type JobPayload<Kind extends JobKind> = z.infer<(typeof jobPayloadSchemas)[Kind]>;
export const JOB_KINDS: readonly JobKind[] = ['importRun', 'sweep'];
