export interface LeastSquares {
	/** one per column of the design */
	coefficients: Float64Array;
	/** standard error of each; NaN with no degree of freedom left */
	standardErrors: Float64Array;
	/** √(Σ residual² / (n − p)); NaN with no degree of freedom left */
	residualSd: number;
	degreesOfFreedom: number;
}

/** A column whose rest after the others is this much smaller than the column itself says nothing of its own. */
const RANK_TOLERANCE = 1e-13;

/**
 * Linear least squares y ≈ X·b by Householder reflections, which keep twice the digits that normal equations lose on nearly dependent columns
 * (NIST StRD "Longley" is built to show it). Golub & Van Loan, Matrix Computations, 5.3. O(n·p²).
 *
 * @param columns the design X by columns, each of length n; a column of ones is the caller's business
 * @param y       length n ≥ p
 * @returns null where the columns depend on each other or there are fewer rows than columns
 */
export function leastSquares(columns: readonly ArrayLike<number>[], y: ArrayLike<number>): LeastSquares | null {
	const n = y.length;
	const p = columns.length;
	if (n < p || p === 0) return null;
	const a = columns.map((column) => Float64Array.from(column));
	const right = Float64Array.from(y);
	const diagonal = new Float64Array(p);
	for (let k = 0; k < p; k++) {
		const whole = norm(columns[k], 0);
		const rest = norm(a[k], k);
		if (!(rest > RANK_TOLERANCE * whole)) return null;
		diagonal[k] = a[k][k] > 0 ? -rest : rest;
		a[k][k] -= diagonal[k];
		for (let j = k + 1; j < p; j++) reflect(a[k], a[j], k);
		reflect(a[k], right, k);
	}
	const coefficients = solveUpper(a, diagonal, right, p);
	const degreesOfFreedom = n - p;
	const residualSd = degreesOfFreedom > 0 ? norm(right, p) / Math.sqrt(degreesOfFreedom) : NaN;
	return {
		coefficients,
		standardErrors: inverseRowNorms(a, diagonal, p).map((size) => residualSd * size),
		residualSd,
		degreesOfFreedom
	};
}

/** Euclidean length from an index on, scaled so that squares neither overflow nor vanish. */
function norm(values: ArrayLike<number>, from: number): number {
	let largest = 0;
	for (let i = from; i < values.length; i++) largest = Math.max(largest, Math.abs(values[i]));
	if (largest === 0) return 0;
	let sum = 0;
	for (let i = from; i < values.length; i++) sum += (values[i] / largest) ** 2;
	return largest * Math.sqrt(sum);
}

/** Applies I − 2vvᵀ/vᵀv, v from row k on, to a column in place. */
function reflect(v: Float64Array, column: Float64Array, k: number): void {
	let along = 0;
	let size = 0;
	for (let i = k; i < v.length; i++) {
		along += v[i] * column[i];
		size += v[i] * v[i];
	}
	const factor = (2 * along) / size;
	for (let i = k; i < v.length; i++) column[i] -= factor * v[i];
}

function solveUpper(a: readonly Float64Array[], diagonal: Float64Array, right: Float64Array, p: number): Float64Array {
	const b = new Float64Array(p);
	for (let i = p - 1; i >= 0; i--) {
		let rest = right[i];
		for (let j = i + 1; j < p; j++) rest -= a[j][i] * b[j];
		b[i] = rest / diagonal[i];
	}
	return b;
}

/** √ of the diagonal of (XᵀX)⁻¹ = R⁻¹R⁻ᵀ: lengths of the rows of R⁻¹. */
function inverseRowNorms(a: readonly Float64Array[], diagonal: Float64Array, p: number): Float64Array {
	const squares = new Float64Array(p);
	for (let column = 0; column < p; column++) {
		const unit = new Float64Array(p);
		unit[column] = 1;
		solveUpper(a, diagonal, unit, p).forEach((value, i) => (squares[i] += value * value));
	}
	return squares.map(Math.sqrt);
}
