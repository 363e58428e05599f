import { leastSquares } from './leastSquares.ts';

export interface CurveParameter {
	start: number;
	least: number;
	most: number;
	/** kept at `start` */
	fixed?: boolean;
}

export interface CurveFit {
	values: number[];
	/** NaN for what is fixed or stands at its border */
	standardErrors: number[];
	/** √(Σ residual² / (n − free)) */
	residualSd: number;
	degreesOfFreedom: number;
	squares: number;
}

const MAX_STEPS = 60;
/** The damping doubles and halves between these; beyond the upper one no step helps. */
const LEAST_DAMPING = 1e-12;
const MOST_DAMPING = 1e8;
/** A mean square below this is rounding: residuals are of order one. */
const NOTHING = 1e-22;

/**
 * Least squares for a curve that is not linear in its parameters, each within borders: Levenberg–Marquardt, each step by Householder reflections
 * (Nocedal & Wright, Numerical Optimization, 10.3). Finds the minimum near the start; callers with several valleys start several times.
 *
 * @param residuals one per sample for given parameters; always as many
 */
export function fitCurve(
	residuals: (values: readonly number[]) => Float64Array,
	parameters: readonly CurveParameter[]
): CurveFit {
	const clamp = (value: number, i: number) => Math.min(parameters[i].most, Math.max(parameters[i].least, value));
	let values = parameters.map(({ start }, i) => clamp(start, i));
	let rest = residuals(values);
	let squares = sumOfSquares(rest);
	let damping = 1e-3;
	for (let step = 0; step < MAX_STEPS && damping < MOST_DAMPING && squares > NOTHING * rest.length; step++) {
		const columns = slopes(residuals, values, rest, parameters);
		const free = freeOnes(columns, rest, values, parameters);
		if (free.length === 0) break;
		const moved = dampedStep(columns, rest, free, damping);
		const next = moved && values.map((value, i) => clamp(value + (moved.get(i) ?? 0), i));
		const nextRest = next && residuals(next);
		const nextSquares = nextRest ? sumOfSquares(nextRest) : Infinity;
		if (next && nextRest && nextSquares < squares) {
			const gain = 1 - nextSquares / squares;
			[values, rest, squares] = [next, nextRest, nextSquares];
			damping = Math.max(LEAST_DAMPING, damping / 5);
			if (gain < 1e-9) break;
		} else damping *= 4;
	}
	return describe(residuals, values, rest, squares, parameters);
}

const sumOfSquares = (values: Float64Array): number => values.reduce((sum, value) => sum + value * value, 0);

/** Slope of each residual by each parameter, one-sided away from a border. */
function slopes(
	residuals: (values: readonly number[]) => Float64Array,
	values: readonly number[],
	rest: Float64Array,
	parameters: readonly CurveParameter[]
): Map<number, Float64Array> {
	const columns = new Map<number, Float64Array>();
	parameters.forEach(({ fixed, most }, i) => {
		if (fixed) return;
		const size = 1e-7 * Math.max(1e-2, Math.abs(values[i]));
		const step = values[i] + size > most ? -size : size;
		const beside = residuals(values.map((value, j) => (j === i ? value + step : value)));
		columns.set(
			i,
			beside.map((value, k) => (value - rest[k]) / step)
		);
	});
	return columns;
}

/** Those that do not stand at a border and want to go through it. */
function freeOnes(
	columns: ReadonlyMap<number, Float64Array>,
	rest: Float64Array,
	values: readonly number[],
	parameters: readonly CurveParameter[]
): number[] {
	return [...columns].flatMap(([i, column]) => {
		const downhill = -column.reduce((sum, value, k) => sum + value * rest[k], 0);
		const stuck =
			(values[i] <= parameters[i].least && downhill < 0) || (values[i] >= parameters[i].most && downhill > 0);
		return stuck || downhill === 0 ? [] : [i];
	});
}

function dampedStep(
	columns: ReadonlyMap<number, Float64Array>,
	rest: Float64Array,
	free: readonly number[],
	damping: number
): Map<number, number> | null {
	const n = rest.length;
	const design = free.map((i, at) => {
		const column = columns.get(i) ?? new Float64Array(n);
		const wide = new Float64Array(n + free.length);
		wide.set(column);
		wide[n + at] = Math.sqrt(damping * sumOfSquares(column));
		return wide;
	});
	const right = new Float64Array(n + free.length);
	rest.forEach((value, k) => (right[k] = -value));
	const solved = leastSquares(design, right);
	return solved && new Map(free.map((i, at) => [i, solved.coefficients[at]]));
}

function describe(
	residuals: (values: readonly number[]) => Float64Array,
	values: number[],
	rest: Float64Array,
	squares: number,
	parameters: readonly CurveParameter[]
): CurveFit {
	const columns = slopes(residuals, values, rest, parameters);
	const inside = [...columns.keys()].filter((i) => values[i] > parameters[i].least && values[i] < parameters[i].most);
	const linear = leastSquares(
		inside.map((i) => columns.get(i) ?? new Float64Array(rest.length)),
		rest
	);
	const degreesOfFreedom = Math.max(0, rest.length - inside.length);
	const residualSd = degreesOfFreedom > 0 ? Math.sqrt(squares / degreesOfFreedom) : NaN;
	// leastSquares scales by what is left after one more linear step; at the minimum that is nothing, far from it too little
	const scale = linear && linear.residualSd > 0 ? residualSd / linear.residualSd : 1;
	return {
		values,
		standardErrors: values.map((_, i) => {
			const at = inside.indexOf(i);
			return at < 0 || !linear ? NaN : linear.standardErrors[at] * scale;
		}),
		residualSd,
		degreesOfFreedom,
		squares
	};
}
