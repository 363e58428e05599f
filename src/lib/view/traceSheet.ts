import type { CornerCard } from './cornerCard.ts';

/** What a stack of traces needs to be drawn: rows of both laps over one window, and what stands on and under them. */
export type TraceSheet = Pick<
	CornerCard,
	'window' | 'lengthM' | 'closed' | 'speedUnit' | 'split' | 'rows' | 'delta' | 'ruler' | 'tags' | 'slowest' | 'cursor'
> & {
	/** are the lines drawn with fewer points than the grid has, so that a nearer view has to draw them anew */
	decimated?: boolean;
	/** corners over the rows, where the window holds more than one */
	bands?: CornerBand[];
};

/** One corner within a longer window. */
export interface CornerBand {
	number: number;
	/** "4 Tern Hairpin: +0.312 s lost" */
	call: string;
	fromM: number;
	apexM: number;
	toM: number;
}
