/** Paths are written in tenths of a pixel, so that whole numbers are exact enough. */
export const UNITS_PER_PX = 10;

/** Rows are drawn on a plot of 1000 px and stretched to the width that there is. */
export const WIDTH_UNITS = 1000 * UNITS_PER_PX;
