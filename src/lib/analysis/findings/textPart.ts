/** A piece of a sentence; a reference value is set apart so that a page can mark it with the reference's pen. */
export interface TextPart {
	text: string;
	isReference: boolean;
}

/** Evidence as a sentence needs it: `driver` and `reference` carry their unit, `by` is the unsigned difference. */
export interface Said {
	driver: TextPart;
	reference: TextPart;
	by: string;
	hasReference: boolean;
	hasDriver: boolean;
	at: string;
}
