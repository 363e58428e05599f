import { deltaWord, formatSignedSeconds, type DeltaWord } from '../format/delta.ts';

/** One step of the debrief's ledger, as shares of the drawing's height from its top. */
export interface DebriefStep {
	/** "4", "run-up", "the gap" */
	head: string;
	text: string;
	word: DeltaWord;
	top: number;
	height: number;
	/** where the step ends: the line to the next one */
	end: number;
}

/** Thinner is not seen, and a step that costs nothing is a step still. */
const THINNEST = 0.012;

/**
 * The running total over a lap in one step a corner, ending in the gap: the figures sum to it as printed, but for rounding.
 *
 * @param ledger rows in lap order; corner 0 is the run-up, left out where it rounds to nothing
 */
export function debriefLedger(ledger: readonly { corner: number; totalS: number }[]): DebriefStep[] {
	const rows = ledger.filter(({ corner, totalS }) => corner > 0 || deltaWord(totalS) !== 'level');
	const levels = [0];
	for (const { totalS } of rows) levels.push(levels[levels.length - 1] + totalS);
	const gapS = levels[levels.length - 1];
	const [low, high] = [Math.min(...levels), Math.max(...levels)];
	const span = Math.max(high - low, 0.05);
	const y = (level: number) => (high - level) / span;
	const step = (head: string, fromS: number, toS: number): DebriefStep => {
		const word = deltaWord(toS - fromS);
		return {
			head,
			text: formatSignedSeconds(toS - fromS),
			word,
			top: round(Math.min(y(fromS), y(toS))),
			height: round(Math.max(THINNEST, Math.abs(y(toS) - y(fromS)))),
			end: round(y(toS))
		};
	};
	return [
		...rows.map(({ corner }, i) => step(corner === 0 ? 'run-up' : String(corner), levels[i], levels[i + 1])),
		step('the gap', 0, gapS)
	];
}

const round = (value: number): number => Math.round(value * 1e4) / 1e4;
