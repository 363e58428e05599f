import type { Warning } from '../../schemas/analysisDocument.ts';

/** Where the laps of a run were cut from, best first. */
export type MarkSource =
	'givenLine' | 'lapColumn' | 'beacon' | 'lapDistance' | 'lapTime' | 'chosenLine' | 'lapLength' | 'wholeRun' | 'none';

/** A line across the track in local metres: a point on it and the direction in which it is crossed. */
export interface StartLine {
	xM: number;
	yM: number;
	headingRad: number;
	/** how far the line reaches to the left and to the right of its point */
	leftM: number;
	rightM: number;
}

/** When a run crosses its start/finish line. */
export interface LapMarks {
	source: MarkSource;
	/** s from the run's first sample, strictly increasing, interpolated; may lie up to one sample step outside of the run */
	crossingS: Float64Array;
	/** ± of a crossing, s */
	plusMinusS: number;
	/** the file's own numbers of the stretches before, between and after the crossings (one more than crossings), NaN where it has none */
	ownNumbers: number[];
	line: StartLine | null;
	warnings: Warning[];
}
