import { jsonResponse } from '$lib/server/http/json';
import { openApiDocument } from '$lib/server/http/openApi';

/** What the API offers, for programs; the same for everybody. */
export const GET = () => jsonResponse(JSON.stringify(openApiDocument()));
