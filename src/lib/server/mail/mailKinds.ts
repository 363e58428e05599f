import { z } from 'zod';
import { publicIdSchema } from '../../schemas/views.ts';
import { emailSchema } from '../auth/normaliseEmail.ts';

/**
 * The letters that Kerbnote writes, and what each needs to know. Whoever has something to tell calls `queueMail` in the
 * transaction of what happened; nothing here reads the database.
 */

/** A path on this site, with its query; never another host. */
export const sitePathSchema = z
	.string()
	.regex(/^\/(?![/\\])\S*$/, 'a path begins with one "/"')
	.max(600);

/** What stands within a sentence: one line, whatever was pasted. */
const words = (most: number) =>
	z
		.string()
		.transform((text) => text.replaceAll(/[\p{Cc}\p{Zl}\p{Zp}\s]+/gu, ' ').trim())
		.pipe(z.string().min(1).max(most));
const name = words(160);
/** Paragraphs that a person wrote; line ends stay. */
const passage = z.string().trim().min(1).max(4000);
const instant = z.iso.datetime();

export const mailDataSchemas = {
	/** somebody is asked to join: by a coach as their driver, or by an organisation in a role */
	invitation: z.object({
		inviter: name,
		/** null: the inviter asks as a coach */
		organisation: name.nullable(),
		role: z.enum(['driver', 'coach', 'manager', 'admin']),
		/** what the inviter would like to see: "all your runs", "your runs at Vallmere Park"; null where laps are not asked for */
		asksFor: name.nullable(),
		/** the inviter's own words */
		note: passage.nullable(),
		path: sitePathSchema,
		expiresAt: instant
	}),
	/** a minor named their guardian, who has to agree before the account opens */
	guardianConsent: z.object({
		minor: name,
		inviter: name,
		asksFor: name.nullable(),
		path: sitePathSchema,
		expiresAt: instant
	}),
	passwordReset: z.object({ path: sitePathSchema, validMinutes: z.number().int().positive() }),
	/** opt-in: a run was read */
	runAnalysed: z.object({
		driver: name,
		/** is the reader the driver */
		own: z.boolean(),
		/** "14 May, run 2" */
		run: name,
		/** "at Vallmere Park, short" */
		where: name,
		timedLaps: z.number().int().nonnegative(),
		/** s */
		bestLapS: z.number().positive().nullable(),
		path: sitePathSchema
	}),
	debriefSent: z.object({
		coach: name,
		/** "14 May, run 2" */
		run: name,
		where: name,
		/** the coach's first lines; the letter ends in a link to the rest */
		opening: passage.nullable(),
		/** what to do next time, in the coach's order, at most five */
		points: z.array(words(300)).max(5),
		path: sitePathSchema
	}),
	/** somebody answered a note or a debrief */
	reply: z.object({
		from: name,
		/** what was answered: "your note on corner 4, Tern Hairpin" */
		about: name,
		words: passage,
		path: sitePathSchema
	}),
	focusMet: z.object({
		driver: name,
		own: z.boolean(),
		/** "4, Tern Hairpin" */
		corner: name,
		/** the target in trade words: "peak at most 75 %" */
		target: words(300),
		hits: z.number().int().nonnegative(),
		laps: z.number().int().positive(),
		/** s of corner time against before the focus; negative is found; null where it cannot be said */
		paidS: z.number().nullable(),
		path: sitePathSchema
	}),
	/** opt-in: what happened since last week, for a driver or a coach */
	weeklySummary: z.object({
		/** first day of the week */
		from: instant,
		/** one line each, at most twelve: "Mira Tansley: 2 runs, 3 of 4 focus points met" */
		lines: z.array(words(300)).min(1).max(12),
		path: sitePathSchema
	})
};

export const mailKindSchema = z.enum([
	'invitation',
	'guardianConsent',
	'passwordReset',
	'runAnalysed',
	'debriefSent',
	'reply',
	'focusMet',
	'weeklySummary'
]);
export type MailKind = z.infer<typeof mailKindSchema>;
export type MailData<Kind extends MailKind> = z.infer<(typeof mailDataSchemas)[Kind]>;

/**
 * Which letters a person may do without, and what holds before they choose. The others are answers to something that somebody
 * just did, so they carry no unsubscribing.
 */
export const OPTIONAL_KINDS = {
	runAnalysed: { unlessChosen: false },
	debriefSent: { unlessChosen: true },
	reply: { unlessChosen: true },
	focusMet: { unlessChosen: true },
	weeklySummary: { unlessChosen: false }
} as const satisfies Partial<Record<MailKind, { unlessChosen: boolean }>>;
export type OptionalKind = keyof typeof OPTIONAL_KINDS;
export const optionalKindSchema = z.enum(['runAnalysed', 'debriefSent', 'reply', 'focusMet', 'weeklySummary']);

/** To whom: somebody with an account, whose choices count, or an address. */
export const mailToSchema = z.union([
	z.object({ personId: z.number().int().positive() }),
	z.object({ email: emailSchema, name: name.optional() })
]);
export type MailTo = z.input<typeof mailToSchema>;

/** What `queueMail` takes. */
export type MailInput = {
	[Kind in MailKind]: { kind: Kind; to: MailTo; data: z.input<(typeof mailDataSchemas)[Kind]> };
}[MailKind];

/** What `queueMail` answers: the letters that were put in the log; none where nobody wants or can get it. */
export const queuedMailSchema = z.array(publicIdSchema);
