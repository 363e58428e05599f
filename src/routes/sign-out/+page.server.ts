import { signOut } from '$lib/server/auth/auth';
import type { Actions } from './$types';

export const actions = { default: signOut } satisfies Actions;
