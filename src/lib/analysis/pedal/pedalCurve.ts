/** A pedal as a curve: fractions of the full input and of the full output. */
export interface PedalCurve {
	gamma: number;
	/** input below which nothing comes out */
	dead: number;
	/** input at which the output is full */
	saturation: number;
	/** highest output */
	top: number;
	/** how much less input holds the same output while releasing */
	hysteresis: number;
}

/**
 * output = top · ((input − dead) / (saturation − dead))^γ, held at its ends.
 *
 * @example pedalOutput({ gamma: 2, dead: 0, saturation: 1, top: 1, hysteresis: 0 }, 0.5) // => 0.25
 */
export function pedalOutput(curve: PedalCurve, input: number): number {
	const { gamma, dead, saturation, top } = curve;
	const share = (input - dead) / (saturation - dead);
	return share <= 0 ? 0 : share >= 1 ? top : top * share ** gamma;
}

/**
 * Where x^γ − x is largest and how large: its slope γ·x^(γ−1) − 1 is zero at x = γ^(1/(1−γ)).
 *
 * @returns null for γ = 1, which is straight
 */
export function powerDeparture(gamma: number): { at: number; size: number } | null {
	if (Math.abs(gamma - 1) < 1e-9) return null;
	const at = gamma ** (1 / (1 - gamma));
	return { at, size: at ** gamma - at };
}
