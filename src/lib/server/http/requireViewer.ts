import type { RequestEvent } from '@sveltejs/kit';
import type { TokenScope } from '../../schemas/api.ts';
import { hasScope, type Viewer } from '../access/viewer.ts';
import { RequestProblem } from './problem.ts';

/**
 * The viewer of an API request.
 *
 * @param scope what a token must have been made for
 * @throws {RequestProblem} 401 without a viewer, 403 when the token was made for something else
 */
export function requireViewer(event: Pick<RequestEvent, 'locals'>, scope: TokenScope): Viewer {
	const { viewer } = event.locals;
	if (!viewer) {
		throw new RequestProblem(401, 'sign_in_required', 'the request requires a sign-in or a token', {
			headers: { 'www-authenticate': 'Bearer' }
		});
	}
	if (!hasScope(viewer, scope)) throw new RequestProblem(403, 'scope_missing', `the token requires the scope ${scope}`);
	return viewer;
}
