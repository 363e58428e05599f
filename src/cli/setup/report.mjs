import { SetupError, sentenceFor } from './SetupError.mjs';

/**
 * Shows a failure as a person should see it: one sentence, and a program's own last words below it.
 *
 * @param {unknown} error
 */
export function report(error) {
	console.error(sentenceFor(error));
	if (error instanceof SetupError && error.details) console.error(indent(error.details));
	if (process.env.KERBNOTE_DEBUG === '1') console.error(error);
}

/** @param {string} text */
function indent(text) {
	return text.replace(/^/gm, '  ');
}
