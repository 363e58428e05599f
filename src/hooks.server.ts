export { handle } from '$lib/server/hooks/handle';
export { handleError } from '$lib/server/hooks/handleError';
export { init } from '$lib/server/hooks/init';
