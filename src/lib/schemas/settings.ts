import { z } from 'zod';
import { tokenScopeSchema } from './api.ts';
import { preferencesSchema, publicIdSchema } from './views.ts';

/** One place where the person is signed in. */
export const signInViewSchema = z.object({
	id: publicIdSchema,
	userAgent: z.string().nullable(),
	address: z.string().nullable(),
	createdAt: z.iso.datetime(),
	lastSeenAt: z.iso.datetime(),
	/** is it the one that asks */
	isThis: z.boolean()
});
export type SignInView = z.infer<typeof signInViewSchema>;

/** A token of a program; the token itself is shown once, when it is made. */
export const tokenViewSchema = z.object({
	id: publicIdSchema,
	name: z.string(),
	scopes: z.array(tokenScopeSchema),
	createdAt: z.iso.datetime(),
	lastUsedAt: z.iso.datetime().nullable(),
	/** null: until it is revoked */
	expiresAt: z.iso.datetime().nullable()
});
export type TokenView = z.infer<typeof tokenViewSchema>;

export const settingsViewSchema = z.object({
	name: z.string(),
	email: z.string(),
	preferences: preferencesSchema,
	signIns: z.array(signInViewSchema),
	tokens: z.array(tokenViewSchema)
});
export type SettingsView = z.infer<typeof settingsViewSchema>;

/** What the person calls themselves, and how figures are set for them. */
export const profileInputSchema = z.object({
	name: z.string().trim().min(1, 'Write a name').max(120, 'A name has at most 120 characters'),
	theme: preferencesSchema.shape.theme,
	speedUnit: preferencesSchema.shape.speedUnit
});
export type ProfileInput = z.infer<typeof profileInputSchema>;

export const tokenInputSchema = z.object({
	name: z.string().trim().min(1, 'Write what the token is for').max(80, 'A name has at most 80 characters'),
	scopes: z.array(tokenScopeSchema).min(1, 'Choose at least one thing that it may do'),
	/** days until it ends */
	days: z.coerce.number().int().min(1).max(366)
});
export type TokenInput = z.infer<typeof tokenInputSchema>;
