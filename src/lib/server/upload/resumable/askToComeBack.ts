/** The route that speaks the protocol; an upload's id follows. */
export const RESUMABLE_PATH = '/api/v1/uploads/resumable';

/**
 * The answer to a question how far a file is, while that cannot be looked up. Clients take any other failure for the end of the
 * upload and begin anew; 423 says that it is there and busy, and they ask again.
 *
 * @returns null for every other request
 */
export function askToComeBack(method: string, pathname: string): Response | null {
	if (method !== 'HEAD' || !pathname.startsWith(`${RESUMABLE_PATH}/`)) return null;
	return new Response(null, {
		status: 423,
		headers: { 'tus-resumable': '1.0.0', 'retry-after': '1', 'cache-control': 'no-store' }
	});
}
