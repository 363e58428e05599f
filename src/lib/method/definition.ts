/** One number or word of the product: what it is, where that comes from, and where it ends. */
export interface Definition {
	/** as it stands on pages */
	term: string;
	/** unit on pages, where it has one */
	unit?: string;
	/** how it is made, in words that a test can hold */
	meaning: string;
	/** open source, or plainly none */
	source: string;
	/** when it is not known, not said, or less sharp */
	limits?: string;
}

export interface DefinitionGroup {
	/** anchor of the section */
	id: string;
	title: string;
	/** one or two sentences before the list */
	lead: string;
	definitions: readonly Definition[];
}

/** Where nothing published is known to lean on. */
export const COMMON_PRACTICE = 'common practice, no source';
/** Where the product fixes a meaning for itself. */
export const OWN_DEFINITION = 'our definition';
