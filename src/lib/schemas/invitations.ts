import { z } from 'zod';
import { personHeadSchema, publicIdSchema, roleSchema, runListItemSchema } from './views.ts';

/** Which laps one person lets another see. */
export const grantScopeSchema = z.enum(['all', 'circuit', 'event', 'run']);
export type GrantScope = z.infer<typeof grantScopeSchema>;

/** What is let be seen, as one field of a form: "none", "all", "circuit:…", "event:…", "run:…" with the id. */
export const seesSchema = z.union([
	z.enum(['none', 'all']).transform((scope) => ({ scope, id: null })),
	z
		.string()
		.transform((text) => text.split(':'))
		.pipe(z.tuple([z.enum(['circuit', 'event', 'run']), publicIdSchema], 'Choose what they may see'))
		.transform(([scope, id]) => ({ scope, id }))
]);
export type Sees = z.output<typeof seesSchema>;

export const seesText = ({ scope, id }: Sees): string => (id === null ? scope : `${scope}:${id}`);

const emptyIsNull = (text: string) => (text === '' ? null : text);
const email = z.string().trim().pipe(z.email('Write an e-mail address, such as mira@example.org').max(254));

/** The form by which somebody is asked to join. */
export const inviteInputSchema = z.object({
	email,
	/** "coach": as a driver of the inviter; else an organisation and a role in it */
	as: z.union([
		z.literal('coach').transform(() => null),
		z
			.string()
			.transform((text) => text.split(':'))
			.pipe(z.tuple([publicIdSchema, roleSchema], 'Choose what you invite them as'))
			.transform(([organisation, role]) => ({ organisation, role }))
	]),
	/** what the inviter would like to see; "none" where laps are not asked for */
	asksFor: z.union([z.enum(['none', 'all', 'circuit', 'event', 'run']), seesSchema]).transform((asked) => {
		return typeof asked === 'string' ? { scope: asked, id: null } : asked;
	}),
	note: z
		.string()
		.trim()
		.max(1000, 'A note has at most 1000 characters')
		.transform(emptyIsNull)
		.optional()
		.default(null)
});
export type InviteInput = z.output<typeof inviteInputSchema>;

/** What a newcomer says of themself; the password is checked where it is hashed. */
export const accountInputSchema = z
	.object({
		name: z.string().trim().min(1, 'Write your name').max(120, 'A name has at most 120 characters'),
		age: z.enum(['adult', 'under'], 'Say whether you are 18 or older'),
		guardianEmail: z.string().trim().toLowerCase().max(254).optional().default(''),
		sees: seesSchema.optional()
	})
	.superRefine(({ age, guardianEmail }, context) => {
		if (age === 'under' && !z.email().safeParse(guardianEmail).success) {
			context.addIssue({ code: 'custom', path: ['guardianEmail'], message: 'Write your guardian’s e-mail address' });
		}
	});
export type AccountInput = z.output<typeof accountInputSchema>;

/** Something that may be shared, for a choice. */
export const shareOptionSchema = z.object({ value: z.string(), label: z.string() });
export type ShareOption = z.infer<typeof shareOptionSchema>;

/** An invitation as its link shows it. */
export const invitationViewSchema = z.object({
	email: z.string(),
	inviter: z.string(),
	organisation: z.string().nullable(),
	role: roleSchema,
	/** "all your runs"; null where laps are not asked for */
	asksFor: z.string().nullable(),
	/** the choice that fits what is asked for */
	proposed: z.string(),
	note: z.string().nullable(),
	expiresAt: z.iso.datetime(),
	/** has the address an account already */
	hasAccount: z.boolean()
});
export type InvitationView = z.infer<typeof invitationViewSchema>;

export const guardianViewSchema = z.object({
	email: z.string(),
	minor: z.string(),
	inviter: z.string(),
	organisation: z.string().nullable(),
	/** "all their runs"; null where nothing is shared */
	shares: z.string().nullable(),
	expiresAt: z.iso.datetime(),
	hasAccount: z.boolean()
});
export type GuardianView = z.infer<typeof guardianViewSchema>;

/** An invitation as its sender sees it. */
export const sentInvitationSchema = z.object({
	id: publicIdSchema,
	email: z.string(),
	/** organisation and role; null: as the sender's driver */
	as: z.object({ organisation: z.string(), role: roleSchema }).nullable(),
	state: z.enum(['open', 'expired', 'waiting_guardian', 'declined']),
	/** did its letter come back */
	bounced: z.boolean(),
	expiresAt: z.iso.datetime(),
	createdAt: z.iso.datetime()
});
export type SentInvitation = z.infer<typeof sentInvitationSchema>;

/** One thing that a person lets another see. */
export const grantViewSchema = z.object({
	id: publicIdSchema,
	owner: personHeadSchema,
	/** whom it admits */
	grantee: z.string(),
	isOrganisation: z.boolean(),
	/** "all runs", "runs at Vallmere Park" */
	what: z.string(),
	since: z.iso.datetime()
});
export type GrantView = z.infer<typeof grantViewSchema>;

export const rosterRowSchema = z.object({
	driver: personHeadSchema,
	/** what they let the viewer see; empty for a minor in the viewer's care */
	grants: z.array(z.string()),
	/** is it by an organisation alone that the viewer sees them */
	through: z.string().nullable(),
	runs: z.number().int(),
	lastRun: runListItemSchema.nullable()
});
export type RosterRow = z.infer<typeof rosterRowSchema>;

export const driversViewSchema = z.object({
	roster: z.array(rosterRowSchema),
	invitations: z.array(sentInvitationSchema),
	/** who sees laps of the viewer, and of minors in their care */
	given: z.array(grantViewSchema),
	/** roles that the viewer may give, besides asking for drivers as a coach */
	roles: z.array(z.object({ value: z.string(), label: z.string() })),
	/** what the viewer can ask to see */
	askable: z.array(shareOptionSchema),
	mayInvite: z.boolean()
});
export type DriversView = z.infer<typeof driversViewSchema>;
