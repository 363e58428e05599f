/** Prefix of the field that holds a corner's name; its id follows. Apart from the schemas, which the browser need not load. */
export const CORNER_FIELD = 'corner:';
