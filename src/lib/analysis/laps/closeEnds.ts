import { median } from '../stats/quantile.ts';
import type { Channels } from '../model.ts';
import type { Positions } from '../path/freshPositions.ts';
import { sampleBefore } from '../trace/placeTime.ts';
import { speedMps } from './crossLine.ts';
import type { CrossingTimes } from './crossingsByRestart.ts';
import type { StartLine } from './lapMarks.ts';
import { timeBack } from './wayBetween.ts';

/** A file cut at the line begins or ends up to this many sample steps away from it. */
const STEPS = 1.5;
/** A last sample this little behind the line's usual distance lies on it. */
const SLACK_M = 0.2;
/** Without positions or lap distance: lengths and speeds that agree so well mean that a stretch is a whole lap. */
const LENGTH_SHARE = 0.01;
const SPEED_SHARE = 0.1;
/** A whole run counts as one lap from here on. */
const LEAST_LAP_M = 200;
const LEAST_LAP_S = 10;
const LEAST_SPEED_MPS = 3;

/**
 * Adds the crossings at which a file begins or ends: people export whole laps, so that the first sample lies just behind the line
 * or the last just before it. Where nothing else marks a lap, this is also how a file that holds exactly one lap is recognised:
 * its ends meet.
 *
 * @param line known line, null where there is none
 * @returns the crossings with those at the ends; these may lie up to one and a half sample steps outside of the run
 */
export function closeEnds(
	channels: Channels,
	positions: Positions | null,
	{ atS, plusMinusS }: CrossingTimes,
	line: StartLine | null
): CrossingTimes {
	const { timeS } = channels;
	const last = timeS.length - 1;
	const first = atS.length > 0 ? atS[0] : Infinity;
	const final = atS.length > 0 ? atS[atS.length - 1] : -Infinity;
	const startS = first - timeS[0] > LEAST_LAP_S ? startAtLine(channels, positions, line, atS) : null;
	let endS = timeS[last] - final > LEAST_LAP_S ? endAtLine(channels, positions, line, atS) : null;
	if (atS.length === 0) {
		if (startS === null) return { atS, plusMinusS };
		endS ??= wholeRunEnd(channels, positions, startS);
		if (endS === null) return { atS, plusMinusS };
		return { atS: Float64Array.of(startS, endS), plusMinusS: timeS[last] - timeS[last - 1] };
	}
	const all = [...(startS === null ? [] : [startS]), ...atS, ...(endS === null ? [] : [endS])];
	return { atS: Float64Array.from(all), plusMinusS };
}

/** Time of a crossing just before the first sample. */
function startAtLine(
	channels: Channels,
	positions: Positions | null,
	line: StartLine | null,
	atS: Float64Array
): number | null {
	const { timeS, lapDistanceM, lapTimeColumnS } = channels;
	const step = timeS[1] - timeS[0];
	const speed = speedMps(channels, 0);
	if (!(speed > LEAST_SPEED_MPS)) return null;
	const back = (wayM: number) =>
		wayM >= 0 && wayM <= STEPS * speed * step ? timeS[0] - timeBack(channels, 0, wayM) : null;
	if (lapDistanceM) return back(lapDistanceM[0]);
	if (lapTimeColumnS) {
		const since = lapTimeColumnS[0];
		return since >= 0 && since <= STEPS * step ? timeS[0] - since : null;
	}
	if (line && positions) return back(aheadOf(line, positions, 0));
	if (atS.length === 0) {
		// nothing marks a lap: the distance begins with the file, or positions must close
		if (positions) return timeS[0];
		return channels.distanceMeasured ? back(channels.distanceM[0]) : null;
	}
	if (atS.length < 2) return null;
	return wholeLap(channels, timeS[0], atS[0], atS) ? timeS[0] : null;
}

/** Time of a crossing just behind the last sample. */
function endAtLine(
	channels: Channels,
	positions: Positions | null,
	line: StartLine | null,
	atS: Float64Array
): number | null {
	const { timeS, lapDistanceM } = channels;
	const last = timeS.length - 1;
	const step = timeS[last] - timeS[last - 1];
	const speed = speedMps(channels, last);
	if (!(speed > LEAST_SPEED_MPS)) return null;
	const forward = (wayM: number) => (wayM >= 0 && wayM <= STEPS * speed * step ? timeS[last] + wayM / speed : null);
	if (line && positions) return forward(-aheadOf(line, positions, positions.sample.length - 1));
	if (atS.length < 2) return null;
	if (lapDistanceM) {
		const lengths = Array.from(atS, (t) => {
			const i = Math.max(sampleBefore(timeS, t), 0);
			return lapDistanceM[i] + speedMps(channels, i) * (t - timeS[i]);
		});
		const leftM = median(lengths) - lapDistanceM[last];
		return forward(Math.abs(leftM) < SLACK_M ? 0 : leftM);
	}
	return wholeLap(channels, atS[atS.length - 1], timeS[last], atS) ? timeS[last] : null;
}

/** Metres that a position lies behind the line, NaN beside it. */
function aheadOf(line: StartLine, { xM, yM }: Positions, j: number): number {
	const dx = xM[j] - line.xM;
	const dy = yM[j] - line.yM;
	const leftM = -dx * Math.sin(line.headingRad) + dy * Math.cos(line.headingRad);
	if (leftM > line.leftM || leftM < -line.rightM) return NaN;
	return dx * Math.cos(line.headingRad) + dy * Math.sin(line.headingRad);
}

/** Does a stretch have the length of the run's laps, and the speed of a crossing at its open end? */
function wholeLap(channels: Channels, fromS: number, toS: number, atS: Float64Array): boolean {
	const distance = (t: number) => channels.distanceM[Math.max(sampleBefore(channels.timeS, t), 0)];
	const speed = (t: number) => speedMps(channels, Math.max(sampleBefore(channels.timeS, t), 0));
	const lengths = Array.from(atS.subarray(1), (t, k) => distance(t) - distance(atS[k]));
	const lapM = median(lengths);
	const usual = median(Array.from(atS, speed));
	const open = atS.includes(fromS) ? toS : fromS;
	return (
		Math.abs(distance(toS) - distance(fromS) - lapM) <= LENGTH_SHARE * lapM &&
		Math.abs(speed(open) - usual) <= SPEED_SHARE * usual
	);
}

/** Where the ends of a run without any lap mark meet, the line is crossed within a sample step behind its last sample. */
function wholeRunEnd(channels: Channels, positions: Positions | null, startS: number): number | null {
	const { timeS, distanceM } = channels;
	const last = timeS.length - 1;
	const step = timeS[last] - timeS[last - 1];
	const from = speedMps(channels, 0);
	const to = speedMps(channels, last);
	if (!(distanceM[last] - distanceM[0] >= LEAST_LAP_M && timeS[last] - startS >= LEAST_LAP_S)) return null;
	if (!(Math.abs(from - to) <= SPEED_SHARE * Math.max(from, to))) return null;
	if (positions) {
		const { xM, yM } = positions;
		const end = xM.length - 1;
		const apart = Math.hypot(xM[end] - xM[0], yM[end] - yM[0]);
		return apart <= STEPS * to * step + 4 * positions.noiseM ? timeS[last] + apart / to : null;
	}
	return timeS[last] + step / 2;
}
