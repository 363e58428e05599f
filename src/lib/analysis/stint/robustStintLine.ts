import { quantile } from '../stats/quantile.ts';
import { robustSpread } from '../stats/robustSpread.ts';
import { theilSen, type RobustLine } from '../stats/theilSen.ts';

export interface StintLine extends RobustLine {
	/** robust standard deviation about the line, s */
	sd: number;
	/** a lap no more than this above the line speaks for the pace, s */
	marginS: number;
}

/** Of the line: laps closer together than this are the same pace whatever the spread of the others. */
const LEAST_MARGIN = 0.003;
const SDS = 3;
const MAX_ROUNDS = 20;
/** Half of the laps carry the first line, so that just under half of them may be wild. */
const CORE_SHARE = 0.5;
/** Beyond this many laps, first lines are drawn through fewer pairs: the cost grows with the cube. */
const MOST_PAIRS = 4000;
/** A first line steeper than this per lap is no pace: it follows traffic. */
const MOST_SLOPE = 0.02;

/**
 * The line that undisturbed laps follow. Traffic and mistakes only ever slow a lap, and may touch nearly half of them, which is more than
 * Theil–Sen alone bears: the first line is the one with half of the laps closest to it (least trimmed squares, Rousseeuw 1984), then laps
 * within max(3 s.d., 0.3 %) are kept and Theil–Sen is drawn through them, until they stay the same.
 *
 * @param laps, timesS candidates only: whole timed laps
 * @returns null with fewer than two laps
 */
export function robustStintLine(laps: readonly number[], timesS: readonly number[]): StintLine | null {
	if (laps.length < 2) return null;
	let line: RobustLine | null = laps.length < 4 ? theilSen(laps, timesS) : leastTrimmed(laps, timesS);
	if (!line) return null;
	let sd = trimmedSd(laps, timesS, line);
	let kept = '';
	for (let round = 0; round < MAX_ROUNDS; round++) {
		const within = withinMargin(laps, timesS, line, marginOf(laps, line, sd));
		if (within.join() === kept || within.length < 3) break;
		kept = within.join();
		[line, sd] = drawn(
			within.map((i) => laps[i]),
			within.map((i) => timesS[i]),
			line
		);
	}
	return { ...line, sd, marginS: marginOf(laps, line, sd) };
}

function marginOf(laps: readonly number[], { slope, intercept }: RobustLine, sd: number): number {
	return Math.max(SDS * sd, LEAST_MARGIN * (intercept + slope * quantile(laps, 0.5)));
}

function withinMargin(
	laps: readonly number[],
	timesS: readonly number[],
	{ slope, intercept }: RobustLine,
	marginS: number
): number[] {
	return laps.flatMap((lap, i) => (Math.abs(timesS[i] - intercept - slope * lap) <= marginS ? [i] : []));
}

/** Theil–Sen with the middle residual at zero, and the spread about it. */
function drawn(laps: readonly number[], timesS: readonly number[], before: RobustLine): [RobustLine, number] {
	const { slope, intercept } = theilSen(laps, timesS) ?? before;
	const residuals = timesS.map((time, i) => time - intercept - slope * laps[i]);
	return [{ slope, intercept: intercept + quantile(residuals, 0.5) }, spreadOf(residuals)];
}

/** Standard deviation by the middle of the residuals; few laps have two degrees of freedom taken from them by the line. */
function spreadOf(residuals: readonly number[]): number {
	const n = residuals.length;
	const free = n > 2 ? Math.sqrt(n / (n - 2)) : 1;
	return robustSpread(residuals) * free;
}

function leastTrimmed(laps: readonly number[], timesS: readonly number[]): RobustLine | null {
	const n = laps.length;
	const core = Math.floor(CORE_SHARE * n) + 1;
	const stride = Math.max(1, Math.ceil((n * (n - 1)) / 2 / MOST_PAIRS));
	const level = quantile(timesS, 0.25);
	let best: { line: RobustLine; squares: number } | null = null;
	let pair = 0;
	for (let i = 0; i < n; i++) {
		for (let j = i + 1; j < n; j++) {
			if (pair++ % stride !== 0 || laps[j] === laps[i]) continue;
			const slope = (timesS[j] - timesS[i]) / (laps[j] - laps[i]);
			if (Math.abs(slope) > MOST_SLOPE * level) continue;
			const line = refined(laps, timesS, { slope, intercept: timesS[i] - slope * laps[i] }, core);
			if (!best || line.squares < best.squares) best = line;
		}
	}
	return best?.line ?? theilSen(laps, timesS);
}

/** One step from a line through two laps to the best level for it, and what its core costs. */
function refined(
	laps: readonly number[],
	timesS: readonly number[],
	{ slope }: RobustLine,
	core: number
): { line: RobustLine; squares: number } {
	// for a given slope the best level is the mean of the window of sorted levels with the least variance
	const levels = Float64Array.from(laps, (lap, i) => timesS[i] - slope * lap).sort();
	const base = levels[0];
	let [sum, sumSquares] = [0, 0];
	let best = { line: { slope, intercept: base }, squares: Infinity };
	for (let i = 0; i < levels.length; i++) {
		const value = levels[i] - base;
		sum += value;
		sumSquares += value * value;
		if (i >= core) {
			const gone = levels[i - core] - base;
			sum -= gone;
			sumSquares -= gone * gone;
		}
		if (i < core - 1) continue;
		const squares = Math.max(0, sumSquares - (sum * sum) / core);
		if (squares < best.squares) best = { line: { slope, intercept: base + sum / core }, squares };
	}
	return best;
}

/** First guess of the spread: the half of the residuals that are smallest hold ±0.6745 s.d. of normal ones. */
function trimmedSd(laps: readonly number[], timesS: readonly number[], { slope, intercept }: RobustLine): number {
	const away = laps.map((lap, i) => Math.abs(timesS[i] - intercept - slope * lap));
	return quantile(away, 0.5) / 0.6745;
}
