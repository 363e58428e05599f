import { median } from '../stats/quantile.ts';
import type { Channels } from '../model.ts';
import type { Positions } from '../path/freshPositions.ts';
import { sampleBefore } from '../trace/placeTime.ts';
import type { Warning } from '../../schemas/analysisDocument.ts';
import type { WarningCode } from '../../schemas/codes.ts';
import { closeEnds } from './closeEnds.ts';
import { crossLine, speedMps } from './crossLine.ts';
import type { Crossing } from './crossLine.ts';
import { crossingsByEvenLaps } from './crossingsByEvenLaps.ts';
import { crossingsByLapDistance, crossingsByLapTime } from './crossingsByRestart.ts';
import type { CrossingTimes } from './crossingsByRestart.ts';
import { crossingsByLapLength } from './crossingsByLapLength.ts';
import type { LapMarks, MarkSource, StartLine } from './lapMarks.ts';
import { beaconPulses, lapColumnChanges, lapDistanceRestarts, lapTimeRestarts } from './markSamples.ts';
import { chooseLine, lineThroughMarks } from './startLine.ts';

/** A lap column may change this long after the line is crossed: some files write it once a second. */
const LARGEST_LAG_S = 3;
/** Crossings known better than this are not looked for elsewhere. */
const FINE_S = 0.0005;

/**
 * Finds when a run crosses its start/finish line.
 *
 * What marks a lap is taken from, best first: a line that a person gave, lap column, beacon, restart of the lap distance or of the
 * running lap time, a line chosen on the path, laps of one length. When within the marked sample step the line was crossed is
 * taken from whatever knows it best: the lap distance, the lap time, positions against the line that fits all marks, laps of
 * even length; else the middle of the step.
 *
 * @param positions null where the run has none
 * @param line      a line that a person gave, in local metres
 */
export function findMarks(channels: Channels, positions: Positions | null, line: StartLine | null): LapMarks {
	const warnings: Warning[] = [];
	if (line && positions) {
		const crossings = mainDirection(line, positions, channels);
		return closed('givenLine', fromCrossings(crossings, positions, channels), line);
	}
	const restarts = lapDistanceRestarts(channels);
	const named = namedMarks(channels, restarts, warnings);
	if (named) {
		const fitted = positions ? lineThroughMarks(named.marks, positions) : null;
		return closed(named.source, refine(channels, positions, named.marks, restarts, fitted), fitted);
	}
	if (positions) {
		const chosen = chooseLine(positions, channels);
		if (chosen) {
			warnings.push(
				warning(
					'line_chosen',
					'no lap marks in the file: the line was drawn square to the path where the car first drove'
				)
			);
			if (channels.lapColumn && chosen.crossings.length > 2) {
				warnings.push(
					warning('lap_column_unused', 'the lap column never changes although the car goes round several times')
				);
			}
			return closed('chosenLine', fromCrossings(chosen.crossings, positions, channels), chosen.line);
		}
	}
	const even = crossingsByLapLength(channels);
	if (even) {
		warnings.push(
			warning('line_chosen', 'no lap marks in the file: laps were cut by their length, from where the car first drove')
		);
		return closed('lapLength', even, null);
	}
	return closed('none', { atS: new Float64Array(0), plusMinusS: 0 }, null);

	function closed(source: MarkSource, times: CrossingTimes, at: StartLine | null): LapMarks {
		const ends = closeEnds(channels, positions, times, at);
		const found = source === 'none' && ends.atS.length > 0 ? 'wholeRun' : source;
		return {
			source: found,
			crossingS: ends.atS,
			plusMinusS: ends.plusMinusS,
			ownNumbers: ownNumbers(channels, ends.atS),
			line: at,
			warnings
		};
	}
}

interface NamedMarks {
	source: MarkSource;
	marks: number[];
}

/** Marks that the file itself carries, moved to the restart of the lap distance where a lap column comes late. */
function namedMarks(channels: Channels, restarts: number[], warnings: Warning[]): NamedMarks | null {
	const { timeS } = channels;
	let source: MarkSource = 'lapColumn';
	let marks = lapColumnChanges(channels);
	if (marks.length === 0) {
		source = 'beacon';
		marks = beaconPulses(channels);
	}
	if (marks.length > 0 && restarts.length >= 2 * marks.length + 1) {
		warnings.push(warning('lap_column_unused', 'the lap column changes less often than the lap distance restarts'));
		marks = [];
	}
	if (marks.length > 0) {
		const moved = marks.map((mark) => nearest(restarts, mark, timeS) ?? mark);
		return { source, marks: moved };
	}
	if (restarts.length > 0) return { source: 'lapDistance', marks: restarts };
	const clock = lapTimeRestarts(channels);
	return clock.length > 0 ? { source: 'lapTime', marks: clock } : null;
}

function nearest(restarts: number[], mark: number, timeS: Float64Array): number | null {
	let best: number | null = null;
	for (const restart of restarts) {
		const apart = Math.abs(timeS[restart] - timeS[mark]);
		if (apart <= LARGEST_LAG_S && (best === null || apart < Math.abs(timeS[best] - timeS[mark]))) best = restart;
	}
	return best;
}

/** The finest crossing times that the file allows for these marks. */
function refine(
	channels: Channels,
	positions: Positions | null,
	marks: number[],
	restarts: number[],
	line: StartLine | null
): CrossingTimes {
	const known = new Set(restarts);
	const candidates: CrossingTimes[] = [];
	const offer = (times: CrossingTimes | null) => times && candidates.push(times);
	if (marks.every((mark) => known.has(mark))) offer(crossingsByLapDistance(channels, marks));
	if (candidates.length > 0 && candidates[0].plusMinusS <= FINE_S) return candidates[0];
	if (positions && line) offer(crossingsAtMarks(channels, positions, marks, line));
	offer(crossingsByLapTime(channels, marks));
	if (candidates.length === 0) offer(crossingsByEvenLaps(channels, marks));
	if (candidates.length === 0) offer(middleOfStep(channels, marks));
	return candidates.reduce((best, times) => (times.plusMinusS < best.plusMinusS ? times : best));
}

/** Passes over the fitted line that lie at the marks; null where a mark has none. */
function crossingsAtMarks(
	channels: Channels,
	positions: Positions,
	marks: number[],
	line: StartLine
): CrossingTimes | null {
	const { timeS } = channels;
	const crossings = crossLine(line, positions, channels);
	const atS = new Float64Array(marks.length);
	for (let k = 0; k < marks.length; k++) {
		const mark = timeS[marks[k]];
		const found = crossings.find((crossing) => Math.abs(crossing.atS - mark) < LARGEST_LAG_S);
		if (!found) return null;
		atS[k] = found.atS;
	}
	return { atS, plusMinusS: positionPlusMinus(channels, positions, crossings) };
}

function middleOfStep({ timeS }: Channels, marks: number[]): CrossingTimes {
	const from = marks.map((i) => timeS[Math.max(i - 1, 0)]);
	const atS = Float64Array.from(marks, (i, k) => (from[k] + timeS[i]) / 2);
	return { atS, plusMinusS: median(marks.map((i, k) => (timeS[i] - from[k]) / 2)) };
}

function fromCrossings(crossings: Crossing[], positions: Positions, channels: Channels): CrossingTimes {
	return {
		atS: Float64Array.from(crossings, (crossing) => crossing.atS),
		plusMinusS: positionPlusMinus(channels, positions, crossings)
	};
}

function positionPlusMinus(channels: Channels, positions: Positions, crossings: Crossing[]): number {
	const speed = median(crossings.map(({ behind }) => speedMps(channels, positions.sample[behind])));
	// about ten positions are fitted where they are noisy
	const noise = positions.noiseM > 0.02 ? positions.noiseM / 3 : positions.noiseM;
	return speed > 1 ? noise / speed : 0;
}

/** A given line has no direction: it is crossed the way in which the run crosses it more often. */
function mainDirection(line: StartLine, positions: Positions, channels: Channels): Crossing[] {
	const forward = crossLine(line, positions, channels);
	const turned = { ...line, headingRad: line.headingRad + Math.PI, leftM: line.rightM, rightM: line.leftM };
	const backward = crossLine(turned, positions, channels);
	if (backward.length > forward.length) {
		line.headingRad = turned.headingRad;
		[line.leftM, line.rightM] = [line.rightM, line.leftM];
		return backward;
	}
	return forward;
}

/** The lap column's value in the middle of each stretch between crossings; NaN without one. */
function ownNumbers({ lapColumn, timeS }: Channels, crossingS: Float64Array): number[] {
	const last = timeS.length - 1;
	return Array.from({ length: crossingS.length + 1 }, (_, k) => {
		if (!lapColumn) return NaN;
		const from = k === 0 ? timeS[0] : crossingS[k - 1];
		const to = k === crossingS.length ? timeS[last] : crossingS[k];
		const middle = Math.min(Math.max(sampleBefore(timeS, (from + to) / 2), 0), last);
		return lapColumn[middle];
	});
}

function warning(code: WarningCode, message: string): Warning {
	return { code, message, row: null };
}
