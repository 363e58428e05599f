import type { ErrorDocument } from './analysisDocument.ts';
import type { ErrorCode } from './codes.ts';

export interface ErrorPlace {
	/** 1-based line of the file */
	row?: number | null;
	/** header of the column */
	column?: string | null;
}

/**
 * The one error that the core throws for bad input: what is wrong, where, and what to do. Anything else that is thrown is a bug.
 *
 * @param code   published code
 * @param message  one sentence without full stop or apology: who, what is required, what came
 * @param remedy what the person does next
 */
export class KerbnoteError extends Error {
	readonly code: ErrorCode;
	readonly remedy: string;
	readonly row: number | null;
	readonly column: string | null;

	constructor(code: ErrorCode, message: string, remedy: string, place: ErrorPlace = {}, options?: ErrorOptions) {
		super(message, options);
		this.name = 'KerbnoteError';
		this.code = code;
		this.remedy = remedy;
		this.row = place.row ?? null;
		this.column = place.column ?? null;
	}

	/** The shape that `analyse` prints and the API sends. */
	toDocument(): ErrorDocument {
		const { code, message, row, column, remedy } = this;
		return { error: { code, message, row, column, remedy } };
	}
}
