import type { CompareSide } from '../../src/lib/analysis/compare/compareLaps.ts';
import type { Corner, CornerMetrics } from '../../src/lib/schemas/analysisDocument.ts';

/**
 * Laps of a point mass on a circuit of 1 000 m with two corners, by constant accelerations: v² = v₀² + 2·a·s. Small enough to
 * work out on paper what a change in one stretch costs.
 */

/** A stretch of constant acceleration and constant pedals. */
export interface Stretch {
	toM: number;
	mps2: number | ((speedMps: number) => number);
	brakePct?: number;
	throttlePct?: number;
}

export const LENGTH_M = 1000;
const MARGIN_M = 100;
const STEPS_PER_M = 20;

export const TWO_CORNERS: Corner[] = [
	{ number: 1, startM: 380, apexM: 430, endM: 480 },
	{ number: 2, startM: 780, apexM: 830, endM: 880 }
].map((corner) => ({
	...corner,
	apex2M: null,
	direction: 'left',
	minRadiusM: 60,
	angleDeg: 90,
	linkedTo: null,
	kind: 'braked'
}));

const NO_METRICS = {
	onsetM: null,
	onsetS: null,
	peakPct: null,
	peakRawPct: null,
	peakM: null,
	riseS: null,
	releaseStartM: null,
	releaseEndM: null,
	releaseS: null,
	releaseProgressive: null,
	dabs: null,
	lightHoldS: null,
	trailS: null,
	trailM: null,
	turnInM: null,
	entryKmh: null,
	minKmh: null,
	minSpeedM: null,
	liftM: null,
	smallestOpeningPct: null,
	smallestOpeningM: null,
	pickUpM: null,
	fullThrottleM: null,
	secondLiftS: null,
	overlapS: null,
	coastingS: null,
	exitKmh: null,
	idleGapS: null,
	lockUps: null,
	timeS: null
} satisfies Partial<CornerMetrics>;

/**
 * Drives the stretches once round; before and after the line the car keeps the speed that it has there.
 *
 * @param startMps speed at the line
 * @param changes  metrics that the stretches do not tell, by corner
 */
export function pointMassLap(
	lapNumber: number,
	startMps: number,
	stretches: readonly Stretch[],
	changes: Record<number, Partial<CornerMetrics>> = {}
): CompareSide {
	const n = LENGTH_M + 1 + 2 * MARGIN_M;
	const column = () => new Float64Array(n);
	const timeS = column();
	const speedKmh = column();
	const brakePct = column();
	const throttlePct = column();
	let square = startMps * startMps;
	let clockS = 0;
	for (let m = -MARGIN_M; m <= LENGTH_M + MARGIN_M; m++) {
		const i = m + MARGIN_M;
		const stretch = stretches.find(({ toM }) => m < toM) ?? stretches[stretches.length - 1];
		const inside = m >= 0 && m < LENGTH_M;
		timeS[i] = m < 0 ? m / startMps : clockS;
		speedKmh[i] = Math.sqrt(square) * 3.6;
		brakePct[i] = stretch.brakePct ?? 0;
		throttlePct[i] = stretch.throttlePct ?? (stretch.brakePct ? 0 : 100);
		for (let step = 0; m >= 0 && step < STEPS_PER_M; step++) {
			const speed = Math.sqrt(square);
			const mps2 = typeof stretch.mps2 === 'number' ? stretch.mps2 : stretch.mps2(speed);
			if (inside) square += (2 * mps2) / STEPS_PER_M;
			clockS += 2 / STEPS_PER_M / (speed + Math.sqrt(square));
		}
	}
	const lapTimeS = timeS[LENGTH_M + MARGIN_M];
	const metrics = TWO_CORNERS.map((corner): CornerMetrics => {
		const kmhAt = (m: number) => speedKmh[m + MARGIN_M];
		const window = Array.from({ length: corner.endM - corner.startM + 1 }, (_, i) => corner.startM + i);
		const slowestM = window.reduce((slowest, m) => (kmhAt(m) < kmhAt(slowest) ? m : slowest));
		const fromM = corner.startM - 200;
		const first = (test: (stretch: Stretch, atM: number) => boolean) => {
			let startM = 0;
			for (const stretch of stretches) {
				if (startM >= fromM && startM <= corner.endM && test(stretch, startM)) return startM;
				startM = stretch.toM;
			}
			return null;
		};
		const onsetM = first(({ brakePct: brake }) => (brake ?? 0) > 5);
		const releaseEndM = onsetM === null ? null : first(({ brakePct: brake }, m) => m > onsetM && !brake);
		const throttleOf = ({ throttlePct: throttle, brakePct: brake }: Stretch) => throttle ?? (brake ? 0 : 100);
		const liftM = first((stretch) => throttleOf(stretch) < 95);
		const closedM = first((stretch) => throttleOf(stretch) <= 5);
		const pickUpM = first(
			(stretch, m) => closedM !== null && m > (releaseEndM ?? closedM) - 1 && throttleOf(stretch) > 5
		);
		return {
			lap: lapNumber,
			corner: corner.number ?? 0,
			...NO_METRICS,
			onsetM,
			releaseEndM,
			liftM,
			pickUpM,
			fullThrottleM: first((stretch, m) => pickUpM !== null && m >= pickUpM && throttleOf(stretch) >= 95),
			turnInM: corner.startM,
			entryKmh: kmhAt(corner.startM),
			minKmh: kmhAt(slowestM),
			minSpeedM: slowestM,
			exitKmh: kmhAt(corner.endM),
			...changes[corner.number ?? 0],
			plusMinus: {},
			reasons: liftM === null ? { pickUpM: 'flat' } : {}
		};
	});
	return {
		grid: {
			lapNumber,
			lengthM: LENGTH_M,
			marginM: MARGIN_M,
			lapTimeS,
			timeS,
			speedKmh,
			brakePct,
			throttlePct,
			steeringDeg: null,
			offsetM: null,
			curvaturePerM: null,
			accLongMps2: null,
			gear: null,
			engineSpeedRpm: null
		},
		metrics
	};
}
