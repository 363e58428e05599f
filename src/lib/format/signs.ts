/** Signs and spaces of a well-set number: a real minus (U+2212), and a space that does not break before a unit or within a number. */
export const MINUS = '\u2212';
export const NO_BREAK_SPACE = '\u00a0';
/** Stands where a value is not known. */
export const NOT_KNOWN = '–';
