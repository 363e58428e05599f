import type { ErrorDocument } from './analysisDocument.ts';
import type { ErrorCode } from './codes.ts';
import type { ImportQuestion } from './importQuestion.ts';

export interface ErrorPlace {
	/** 1-based line of the file */
	row?: number | null;
	/** header of the column */
	column?: string | null;
	/** name of the file, where the message speaks of one */
	file?: string | null;
	/** what a person is asked, with `needs_answer` */
	question?: ImportQuestion;
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
	readonly file: string | null;
	readonly question: ImportQuestion | undefined;

	constructor(code: ErrorCode, message: string, remedy: string, place: ErrorPlace = {}, options?: ErrorOptions) {
		super(message, options);
		this.name = 'KerbnoteError';
		this.code = code;
		this.remedy = remedy;
		this.row = place.row ?? null;
		this.column = place.column ?? null;
		this.file = place.file ?? null;
		this.question = place.question;
	}

	/** The same error, said of a file; a name that it already bears stays. */
	inFile(file: string): KerbnoteError {
		if (this.file !== null) return this;
		const { row, column, question, cause } = this;
		const named = new KerbnoteError(this.code, this.message, this.remedy, { row, column, question, file }, { cause });
		named.stack = this.stack;
		return named;
	}

	/** The shape that `analyse` prints and the API sends. */
	toDocument(): ErrorDocument {
		const { code, message, file, row, column, remedy, question } = this;
		return { error: { code, message, file, row, column, remedy, ...(question && { question }) } };
	}
}
