import { factorise, solve } from './smoothingBands.ts';

export interface ScatteredSmoothing {
	/** number of grid values, ≥ 8 */
	nodes: number;
	/** strength of the penalty, > 0, in the units of the weights */
	lambda: number;
	/** the last grid value is followed by the first */
	closed: boolean;
}

/**
 * Grid values of a smooth curve through scattered points, by penalised least squares on the third difference: minimises
 * Σ wⱼ (yⱼ − z(uⱼ))² + λ Σ (Δ³z)ᵢ², where z between grid values is the cubic through the four nearest.
 *
 * A penalty on the third difference leaves straights, arcs and the ramps between them as they are, bridges gaps, and takes out
 * what is quicker than a wavelength of 2π (λ/ρ)^(1/6) steps at a density of ρ points per step: where a car is slow there are
 * more points and finer detail. Whittaker 1923; Eilers 2003, Anal. Chem. 75, 3631. O(points + nodes).
 *
 * @param at      place of each point in grid steps; wrapped on a closed grid, else within [0, nodes − 1]
 * @param columns values of the points, one entry per point in each column
 * @param weights of the points, ≥ 0; null means 1 each
 * @returns one new column of grid values per column
 * @throws {RangeError} with fewer than 8 nodes or a penalty that is not above 0
 */
export function smoothScattered(
	at: Float64Array,
	columns: Float64Array[],
	weights: Float64Array | null,
	{ nodes, lambda, closed }: ScatteredSmoothing
): Float64Array[] {
	if (!(nodes >= 8)) throw new RangeError(`smoothScattered requires at least 8 nodes, got ${nodes}`);
	if (!(lambda > 0)) throw new RangeError(`smoothScattered requires lambda > 0, got ${lambda}`);
	const gathered = gather(at, columns, weights, nodes, closed);
	if (closed) return smoothGathered(gathered, lambda);
	// nobody else needs what was gathered: solved in place
	const factor = factorise(gathered.bands, lambda);
	for (const side of gathered.sides) solve(factor, side);
	return gathered.sides;
}

/** Points of a smoothing problem summed up on its grid, so that it can be solved for several strengths of the penalty. */
export interface Gathered {
	/** bands[k][i] = Σ w · share of node i + k · share of node i */
	bands: Float64Array[];
	/** per column, Σ w · share · value */
	sides: Float64Array[];
	/** sum of the weights */
	total: number;
	nodes: number;
	closed: boolean;
}

/** First half of `smoothScattered`: O(points). */
export function gather(
	at: Float64Array,
	columns: Float64Array[],
	weights: Float64Array | null,
	nodes: number,
	closed: boolean
): Gathered {
	const bands = [0, 1, 2, 3].map(() => new Float64Array(nodes));
	const [b0, b1, b2, b3] = bands;
	const sides = columns.map(() => new Float64Array(nodes));
	const share = new Float64Array(4);
	let total = 0;
	for (let j = 0; j < at.length; j++) {
		const weight = weights ? weights[j] : 1;
		if (!(weight > 0)) continue;
		total += weight;
		const u = at[j];
		let first = Math.floor(u) - 1;
		if (!closed) first = Math.max(0, Math.min(nodes - 4, first));
		cubicShares(u - first, share);
		const n0 = closed ? wrap(first, nodes) : first;
		const n1 = closed ? wrap(first + 1, nodes) : first + 1;
		const n2 = closed ? wrap(first + 2, nodes) : first + 2;
		const n3 = closed ? wrap(first + 3, nodes) : first + 3;
		// not by destructuring, which would walk an iterator for each point
		const s0 = share[0];
		const s1 = share[1];
		const s2 = share[2];
		const s3 = share[3];
		b0[n0] += weight * s0 * s0;
		b0[n1] += weight * s1 * s1;
		b0[n2] += weight * s2 * s2;
		b0[n3] += weight * s3 * s3;
		b1[n0] += weight * s0 * s1;
		b1[n1] += weight * s1 * s2;
		b1[n2] += weight * s2 * s3;
		b2[n0] += weight * s0 * s2;
		b2[n1] += weight * s1 * s3;
		b3[n0] += weight * s0 * s3;
		for (let c = 0; c < columns.length; c++) {
			const side = sides[c];
			const value = weight * columns[c][j];
			side[n0] += value * s0;
			side[n1] += value * s1;
			side[n2] += value * s2;
			side[n3] += value * s3;
		}
	}
	return { bands, sides, total, nodes, closed };
}

/** Second half of `smoothScattered`: O(nodes); leaves what was gathered as it is. */
export function smoothGathered({ bands, sides, total, nodes, closed }: Gathered, lambda: number): Float64Array[] {
	// a closed grid is solved as an open one whose ends overlap by four wavelengths
	const wavelength = 2 * Math.PI * Math.pow((lambda * nodes) / Math.max(total, 1e-9), 1 / 6);
	const pad = closed ? Math.min(nodes, Math.ceil(4 * wavelength) + 8) : 0;
	const unrolled = (column: Float64Array) => {
		const long = new Float64Array(nodes + 2 * pad);
		long.set(column.subarray(nodes - pad), 0);
		long.set(column, pad);
		long.set(column.subarray(0, pad), pad + nodes);
		return long;
	};
	const factor = factorise(bands.map(unrolled), lambda);
	return sides.map((side) => {
		const z = unrolled(side);
		solve(factor, z);
		return pad > 0 ? z.slice(pad, pad + nodes) : z;
	});
}

function wrap(i: number, n: number): number {
	const r = i % n;
	return r < 0 ? r + n : r;
}

/** Shares of the four nodes 0, 1, 2, 3 in the value of their cubic at u (Lagrange). */
function cubicShares(u: number, out: Float64Array): void {
	const a = u - 1;
	const b = u - 2;
	const c = u - 3;
	out[0] = -(a * b * c) / 6;
	out[1] = (u * b * c) / 2;
	out[2] = -(u * a * c) / 2;
	out[3] = (u * a * b) / 6;
}
