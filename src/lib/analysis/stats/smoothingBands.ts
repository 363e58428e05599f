/** LDLᵀ of a symmetric matrix with three bands beside the diagonal. */
export interface BandFactor {
	d: Float64Array;
	l1: Float64Array;
	l2: Float64Array;
	l3: Float64Array;
}

/** Coefficients of the third difference, Δ³z = −z₀ + 3z₁ − 3z₂ + z₃. */
const THIRD = [-1, 3, -3, 1];

/**
 * Factors A + λ·D₃ᵀD₃, where D₃ takes third differences. Cholesky without roots, O(n).
 *
 * @param bands A's diagonal and the three bands below it: bands[k][i] = A[i + k][i]; overwritten
 */
export function factorise(bands: Float64Array[], lambda: number): BandFactor {
	const n = bands[0].length;
	for (let row = 0; row + 3 < n; row++) {
		for (let a = 0; a < 4; a++) for (let b = a; b < 4; b++) bands[b - a][row + a] += lambda * THIRD[a] * THIRD[b];
	}
	const [d, l1, l2, l3] = bands;
	for (let i = 0; i < n; i++) {
		const a1 = l1[i];
		const a2 = l2[i];
		const a3 = l3[i];
		const f1 = a1 / d[i];
		const f2 = a2 / d[i];
		const f3 = a3 / d[i];
		if (i + 1 < n) {
			d[i + 1] -= f1 * a1;
			l1[i + 1] -= f1 * a2;
			l2[i + 1] -= f1 * a3;
		}
		if (i + 2 < n) {
			d[i + 2] -= f2 * a2;
			l1[i + 2] -= f2 * a3;
		}
		if (i + 3 < n) d[i + 3] -= f3 * a3;
		l1[i] = f1;
		l2[i] = f2;
		l3[i] = f3;
	}
	return { d, l1, l2, l3 };
}

/** Solves L D Lᵀ z = b; `z` holds b on entry and the solution on return. */
export function solve({ d, l1, l2, l3 }: BandFactor, z: Float64Array): void {
	const n = z.length;
	for (let i = 0; i < n; i++) {
		const v = z[i];
		if (i + 1 < n) z[i + 1] -= l1[i] * v;
		if (i + 2 < n) z[i + 2] -= l2[i] * v;
		if (i + 3 < n) z[i + 3] -= l3[i] * v;
	}
	for (let i = n - 1; i >= 0; i--) {
		let v = z[i] / d[i];
		if (i + 1 < n) v -= l1[i] * z[i + 1];
		if (i + 2 < n) v -= l2[i] * z[i + 2];
		if (i + 3 < n) v -= l3[i] * z[i + 3];
		z[i] = v;
	}
}
