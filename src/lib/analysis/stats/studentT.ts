import { gammaln } from 'simple-statistics';

const MAX_TERMS = 300;

/**
 * Value that a Student t variable stays below with the given probability.
 *
 * @param share 0 < share < 1
 * @param degreesOfFreedom > 0, need not be whole
 * @example Math.round(1e6 * studentTQuantile(0.975, 10)) / 1e6 // => 2.228139
 */
export function studentTQuantile(share: number, degreesOfFreedom: number): number {
	if (!(share > 0 && share < 1)) throw new RangeError(`studentTQuantile requires 0 < share < 1, got ${share}`);
	if (!(degreesOfFreedom > 0))
		throw new RangeError(`studentTQuantile requires degrees of freedom > 0, got ${degreesOfFreedom}`);
	if (share === 0.5) return 0;
	const tail = share < 0.5 ? share : 1 - share;
	// the tail's probability is I_x(ν/2, ½)/2 with x = ν/(ν + t²), which grows with x: halving finds x to the last digit
	let low = 0;
	let high = 1;
	for (let i = 0; i < 200 && high - low > Number.EPSILON * high; i++) {
		const middle = (low + high) / 2;
		if (betaRatio(middle, degreesOfFreedom / 2, 0.5) / 2 < tail) low = middle;
		else high = middle;
	}
	const x = (low + high) / 2;
	const t = Math.sqrt((degreesOfFreedom * (1 - x)) / x);
	return share < 0.5 ? -t : t;
}

/** Half-width of a 95 % interval in standard errors. */
export function t95(degreesOfFreedom: number): number {
	return studentTQuantile(0.975, degreesOfFreedom);
}

/**
 * Regularised incomplete beta function I_x(a, b) by its continued fraction (NIST Digital Library of Mathematical Functions 8.17.22,
 * evaluated by Lentz's method).
 */
function betaRatio(x: number, a: number, b: number): number {
	if (x <= 0) return 0;
	if (x >= 1) return 1;
	// the fraction converges quickly on this side only
	if (x > (a + 1) / (a + b + 2)) return 1 - betaRatio(1 - x, b, a);
	const front = Math.exp(
		a * Math.log(x) + b * Math.log1p(-x) - (gammaln(a) + gammaln(b) - gammaln(a + b)) - Math.log(a)
	);
	const guard = (value: number) => (Math.abs(value) < 1e-300 ? 1e-300 : value);
	let c = 1;
	let d = 1 / guard(1 - ((a + b) * x) / (a + 1));
	let value = d;
	for (let m = 1; m < MAX_TERMS; m++) {
		for (const term of [
			(m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m)),
			(-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1))
		]) {
			d = 1 / guard(1 + term * d);
			c = guard(1 + term / c);
			value *= c * d;
		}
		if (Math.abs(c * d - 1) < 1e-16) break;
	}
	return front * value;
}
