import type { Preferences, Role, ViewerHead } from '../../schemas/views.ts';
import type { TokenScope } from '../../schemas/api.ts';

/** Membership that holds now. */
export interface Membership {
	organisationId: number;
	organisationPublicId: string;
	organisationName: string;
	role: Role;
}

/**
 * Who asks. Every query on a person's data takes it, and `access/` alone turns it into what may be seen.
 * A viewer exists only for a person whose account is open and whose sign-in or token holds.
 */
export interface Viewer {
	personId: number;
	publicId: string;
	name: string;
	email: string;
	/** runs the site; opens nobody's laps */
	isOperator: boolean;
	memberships: readonly Membership[];
	/** is a coach or manager anywhere, a guardian, or has been admitted by somebody */
	readsOthers: boolean;
	preferences: Preferences;
	/** by which sign-in; null for a token */
	sessionId: number | null;
	/** what a token was made for; null for a sign-in, which may do all that the person may */
	scopes: ReadonlySet<TokenScope> | null;
}

/** Organisations whose shared laps open to the viewer: a grant to an organisation admits its coaches and managers. */
export function readingOrganisations(viewer: Viewer): number[] {
	return viewer.memberships
		.filter(({ role }) => role === 'coach' || role === 'manager')
		.map(({ organisationId }) => organisationId);
}

/** May the viewer do what the scope covers. */
export function hasScope(viewer: Viewer, scope: TokenScope): boolean {
	return viewer.scopes === null || viewer.scopes.has(scope);
}

/** The viewer as pages know them. */
export function viewerHead(viewer: Viewer): ViewerHead {
	return {
		id: viewer.publicId,
		name: viewer.name,
		email: viewer.email,
		isOperator: viewer.isOperator,
		organisations: viewer.memberships.map(({ organisationPublicId, organisationName, role }) => ({
			id: organisationPublicId,
			name: organisationName,
			role
		})),
		readsOthers: viewer.readsOthers,
		preferences: viewer.preferences
	};
}
