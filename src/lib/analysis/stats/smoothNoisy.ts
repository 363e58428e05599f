import { gather, smoothGathered } from './smoothScattered.ts';
import type { Gathered } from './smoothScattered.ts';

/**
 * Smooths noisy values over time with a strength that the values themselves choose: of a few wavelengths, the one with the least
 * generalised cross-validation score, n · RSS / (n − df)² where df = 2π · span / (3 · wavelength) for this penalty.
 * Craven and Wahba 1979, Numer. Math. 31, 377.
 *
 * @param timeS       s, increasing
 * @param values      same length; NaN is left out
 * @param wavelengthS candidates, s; slower than each is kept, quicker is taken out
 * @returns smoothed values at the same times; the input where fewer than 16 values are known
 */
export function smoothNoisy(timeS: Float64Array, values: Float64Array, wavelengthS: number[]): Float64Array {
	const n = values.length;
	const at = new Float64Array(n);
	const y = new Float64Array(n);
	let count = 0;
	for (let j = 0; j < n; j++) {
		if (Number.isNaN(values[j])) continue;
		at[count] = timeS[j];
		y[count++] = values[j];
	}
	if (count < 16) return values.slice();
	const t0 = at[0];
	const spanS = at[count - 1] - t0;
	const nodes = Math.max(9, Math.ceil((spanS * NODES_PER_WAVELENGTH) / Math.min(...wavelengthS)) + 1);
	const stepS = spanS / (nodes - 1);
	for (let j = 0; j < count; j++) at[j] = (at[j] - t0) / stepS;
	const known = y.subarray(0, count);
	const gathered = gather(at.subarray(0, count), [known], null, nodes, false);
	const density = count / nodes;
	let best: Float64Array | null = null;
	let bestScore = Infinity;
	for (const wavelength of wavelengthS) {
		const cut = (2 * Math.PI * stepS) / wavelength;
		const [z] = smoothGathered(gathered, density / Math.pow(cut, 6));
		// degrees of freedom: nodes / 2π · ∫ dω / (1 + (ω/cut)⁶) = nodes · cut / 3
		const free = Math.min((nodes * cut) / 3 + 3, count - 1);
		const score = (count * misfit(gathered, z, known)) / (count - free) ** 2;
		if (score < bestScore) {
			bestScore = score;
			best = z;
		}
	}
	const smooth = best ?? new Float64Array(nodes);
	const out = new Float64Array(n);
	for (let j = 0; j < n; j++) out[j] = cubicAt(smooth, (timeS[j] - t0) / stepS);
	return out;
}

/** Grid points per shortest wavelength: enough for the cubic between them. */
const NODES_PER_WAVELENGTH = 6;

/** Sum of squared differences between values and curve, from the sums alone: yᵀy − 2 zᵀAᵀy + zᵀAᵀA z. */
function misfit({ bands, sides }: Gathered, z: Float64Array, y: Float64Array): number {
	let sum = 0;
	for (let j = 0; j < y.length; j++) sum += y[j] * y[j];
	const [side] = sides;
	for (let i = 0; i < z.length; i++) {
		sum += z[i] * (bands[0][i] * z[i] - 2 * side[i]);
		for (let k = 1; k < 4 && i + k < z.length; k++) sum += 2 * bands[k][i] * z[i] * z[i + k];
	}
	return Math.max(sum, 0);
}

/** Value on the cubic through the four nearest grid values; held beyond the ends. */
function cubicAt(z: Float64Array, at: number): number {
	const u = Math.min(Math.max(at, 0), z.length - 1);
	const first = Math.max(0, Math.min(z.length - 4, Math.floor(u) - 1));
	const s = u - first;
	const p = s - 1;
	const q = s - 2;
	const r = s - 3;
	return (
		(-z[first] * p * q * r) / 6 +
		(z[first + 1] * s * q * r) / 2 -
		(z[first + 2] * s * p * r) / 2 +
		(z[first + 3] * s * p * q) / 6
	);
}
