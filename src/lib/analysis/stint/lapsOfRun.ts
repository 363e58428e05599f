import type { LapDocument } from '../../schemas/analysisDocument.ts';
import type { StintLapReason } from '../../schemas/stintDocument.ts';
import type { RawStintLap } from './chooseLaps.ts';

/** Laps of an analysed recording as laps of a stint; partial ones at its ends are no laps. */
export function lapsOfRun(laps: readonly LapDocument[]): RawStintLap[] {
	return laps
		.filter((lap) => lap.kind !== 'partial')
		.map((lap) => ({ number: lap.number, timeS: lap.timeS, marked: markOf(lap) }));
}

function markOf({ kind, reasons }: LapDocument): StintLapReason | null {
	if (kind === 'out' || reasons.includes('out_lap') || reasons.includes('standing_start')) return 'out_lap';
	if (kind === 'in' || reasons.includes('in_lap') || reasons.includes('pit_lane')) return 'in_lap';
	if (reasons.includes('neutralised')) return 'neutralised';
	// a slow lap is judged by the stint's own line
	return reasons.some((reason) => reason !== 'slow' && reason !== 'time_coarse') ? 'marked' : null;
}
