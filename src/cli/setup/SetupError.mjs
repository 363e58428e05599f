/**
 * A reason not to start that a person can act on: its message is one sentence (what is wrong and what to do next), shown
 * without a stack.
 */
export class SetupError extends Error {
	/**
	 * @param {string} sentence
	 * @param {{ cause?: unknown, details?: string }} [options] `details`: a program's own last words, shown below the sentence
	 */
	constructor(sentence, options = {}) {
		super(sentence, { cause: options.cause });
		this.name = 'SetupError';
		this.details = options.details ?? '';
	}
}

/**
 * Turns any failure into the one sentence that is shown.
 *
 * @param {unknown} error
 * @returns {string}
 * @example sentenceFor(new SetupError('Port 80 is in use.')) // => 'Port 80 is in use.'
 */
export function sentenceFor(error) {
	if (error instanceof SetupError) return error.message;
	const { code, path, message } = fileProblem(error);
	const where = path ? ` (${path})` : '';
	switch (code) {
		case 'ENOSPC':
		case 'EDQUOT':
			return `The disk is full${where}; free some space and start again.`;
		case 'EACCES':
		case 'EPERM':
			return `This account may not write there${where}; change the folder's owner or start from a folder of your own.`;
		case 'EROFS':
			return `The folder is on a read-only disk${where}; start from a folder that can be written to.`;
		case 'EMFILE':
		case 'ENFILE':
			return 'Too many files are open on this machine; raise the limit (ulimit -n) and start again.';
		default:
			return `Kerbnote could not go on: ${message}`;
	}
}

/** @param {unknown} error */
function fileProblem(error) {
	if (!(error instanceof Error)) return { code: '', path: '', message: String(error) };
	const code = 'code' in error ? String(error.code) : '';
	const path = 'path' in error && typeof error.path === 'string' ? error.path : '';
	return { code, path, message: error.message };
}
