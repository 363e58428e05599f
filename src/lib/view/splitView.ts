import { deltaWord, formatSignedSeconds, type DeltaWord } from '../format/delta.ts';
import { formatDistance } from '../format/distance.ts';
import type { PlacedCorner } from './placedCorner.ts';
import type { CornerWindow } from './cornerWindow.ts';

/** One part of a corner over the chart: a bracket at its true distance with the ledger's number on it. */
export interface SplitPart {
	name: 'entry' | 'mid' | 'exit';
	/** m, within the window */
	fromM: number;
	toM: number;
	deltaS: number;
	text: string;
	word: DeltaWord;
	/** "on to 898 m": where the exit really ends, when the window cuts it */
	goesOn: string | null;
}

/** Entry, mid and exit with the ledger's numbers; a part without length is left out. */
export function splitView(
	{ spans, ledger }: PlacedCorner,
	window: CornerWindow,
	goesOnToM: number | null
): SplitPart[] {
	const part = (name: SplitPart['name'], from: number, to: number, deltaS: number): SplitPart => ({
		name,
		fromM: Math.max(window.fromM, from),
		toM: Math.min(window.toM, to),
		deltaS,
		text: formatSignedSeconds(deltaS),
		word: deltaWord(deltaS),
		goesOn: name === 'exit' && goesOnToM !== null ? `on to ${formatDistance(goesOnToM)}` : null
	});
	return [
		part('entry', spans.entryM, spans.midM, ledger.entryS),
		part('mid', spans.midM, spans.exitM, ledger.midS),
		part('exit', spans.exitM, spans.endM, ledger.exitS)
	].filter((p) => p.toM > p.fromM);
}
