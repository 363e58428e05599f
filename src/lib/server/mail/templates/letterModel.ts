/** What a letter says, before it is set as HTML or as plain text. All strings are plain: setting them escapes them. */
export interface LetterModel {
	subject: string;
	title: string;
	parts: LetterPart[];
	/** the one thing to do */
	action: { label: string; path: string };
	/** said under the button: what holds of the link, and that doing nothing is an answer */
	after: string | null;
	/** why the reader gets it */
	why: string;
}

export type LetterPart =
	| { kind: 'text'; text: string }
	/** a person's own words: plum and italic, as everywhere a coach writes */
	| { kind: 'hand'; text: string; by: string }
	| { kind: 'list'; items: readonly string[] };

export const text = (words: string): LetterPart => ({ kind: 'text', text: words });
export const hand = (words: string, by: string): LetterPart => ({ kind: 'hand', text: words, by });
