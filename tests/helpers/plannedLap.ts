import type { CompareSide } from '../../src/lib/analysis/compare/compareLaps.ts';
import type { Corner, CornerMetrics } from '../../src/lib/schemas/analysisDocument.ts';

/**
 * Laps of any circuit in closed form: one braking, one plateau at the minimum speed and one opening of the throttle for each corner, by
 * constant accelerations. A mistake changes one corner's plan, so what it costs is the difference of two lap times.
 */

/** How one corner is driven. */
export interface CornerPlan {
	onsetM: number;
	minMps: number;
	pickUpM: number;
	/** m/s² of braking, positive */
	brakingMps2: number;
	peakPct: number;
	/** s with neither pedal before the onset */
	coastS: number;
}

export interface Circuit {
	lengthM: number;
	corners: Corner[];
	plans: CornerPlan[];
	startMps: number;
}

const OPENING_MPS2 = 1.6;
const OPENING_S = 0.4;
const FULL_MPS2 = 3.6;
const TOP_MPS = 75;
const COASTING_MPS2 = -1.1;
const PEDAL_S = 0.1;
const MARGIN_M = 250;
const STEPS_PER_M = 40;

interface Driven {
	timeS: Float64Array;
	mps: Float64Array;
	brakePct: Float64Array;
	throttlePct: Float64Array;
	lapTimeS: number;
	events: { liftM: number; onsetM: number; releaseEndM: number; slowestM: number; fullM: number; coastS: number }[];
}

/** Steps through the lap at 1/40 m, with exact times for constant acceleration in each step. */
function drive({ lengthM, plans, startMps }: Circuit): Driven {
	const n = lengthM + 1;
	const timeS = new Float64Array(n);
	const mps = new Float64Array(n);
	const brakePct = new Float64Array(n);
	const throttlePct = new Float64Array(n);
	const events: Driven['events'] = [];
	let square = startMps * startMps;
	let clockS = 0;
	let k = -1;
	let slowest = true;
	let openingS = OPENING_S;
	let fullM = 0;
	for (let step = 0; step <= lengthM * STEPS_PER_M; step++) {
		const placeM = step / STEPS_PER_M;
		const speed = Math.sqrt(square);
		const next = plans[k + 1];
		const coastFromM = next ? next.onsetM - next.coastS * speed : Infinity;
		if (next && placeM >= next.onsetM) {
			k++;
			slowest = false;
			openingS = 0;
			fullM = 0;
			const liftM = next.onsetM - Math.max(next.coastS, 0.05) * speed;
			events.push({
				liftM,
				onsetM: next.onsetM + 0.005 * speed,
				releaseEndM: next.pickUpM - 3,
				slowestM: 0,
				fullM: 0,
				coastS: next.coastS + 0.15
			});
		}
		const plan = plans[k];
		let mps2 = speed < TOP_MPS ? FULL_MPS2 : 0;
		let brake = 0;
		let throttle = 100;
		if (plan && placeM < plan.pickUpM) {
			throttle = 0;
			if (!slowest && square <= plan.minMps ** 2) {
				slowest = true;
				events[k].slowestM = placeM;
			}
			mps2 = slowest ? 0 : -plan.brakingMps2;
			const left = Math.min(1, Math.max(0, (events[k].releaseEndM - placeM) / 20));
			brake = Math.min(plan.peakPct, plan.peakPct * left);
		} else if (plan && openingS < OPENING_S) {
			mps2 = OPENING_MPS2;
			throttle = (100 * openingS) / OPENING_S;
		} else if (next && next.coastS > 0 && placeM >= coastFromM) {
			mps2 = COASTING_MPS2;
			throttle = 0;
		}
		if (plan && fullM === 0 && throttle >= 95) events[k].fullM = fullM = placeM;
		if (step % STEPS_PER_M === 0) {
			timeS[placeM] = clockS;
			mps[placeM] = speed;
			brakePct[placeM] = brake;
			throttlePct[placeM] = throttle;
		}
		square = Math.max(square + (2 * mps2) / STEPS_PER_M, 1);
		const stepS = 2 / STEPS_PER_M / (speed + Math.sqrt(square));
		if (plan && placeM >= plan.pickUpM) openingS += stepS;
		clockS += stepS;
	}
	return { timeS, mps, brakePct, throttlePct, lapTimeS: timeS[lengthM], events };
}

/** The lap as the comparison takes it. */
export function plannedLap(circuit: Circuit, lapNumber: number): CompareSide {
	const { lengthM, corners, plans, startMps } = circuit;
	const driven = drive(circuit);
	// before the line both laps come at the same speed, and after it they go on at theirs
	const lastMps = driven.mps[lengthM];
	const spread = (column: Float64Array, perM: [number, number] = [0, 0]) =>
		Float64Array.from({ length: lengthM + 1 + 2 * MARGIN_M }, (_, i) => {
			const placeM = i - MARGIN_M;
			if (placeM < 0) return column[0] + placeM * perM[0];
			return placeM > lengthM ? column[lengthM] + (placeM - lengthM) * perM[1] : column[placeM];
		});
	const metrics = corners.map((corner, k): CornerMetrics => {
		const { liftM, onsetM, releaseEndM, slowestM, fullM, coastS } = driven.events[k];
		const plan = plans[k];
		const kmh = (m: number) => driven.mps[Math.round(m)] * 3.6;
		return {
			lap: lapNumber,
			corner: k + 1,
			onsetM,
			onsetS: null,
			peakPct: plan.peakPct,
			peakRawPct: plan.peakPct,
			peakM: onsetM + 3,
			riseS: PEDAL_S,
			releaseStartM: releaseEndM - 20,
			releaseEndM,
			releaseS: 0.8,
			releaseProgressive: true,
			dabs: 0,
			lightHoldS: 0,
			trailS: 0.4,
			trailM: 10,
			turnInM: corner.startM,
			entryKmh: kmh(corner.startM),
			minKmh: plan.minMps * 3.6,
			minSpeedM: slowestM,
			liftM,
			smallestOpeningPct: null,
			smallestOpeningM: null,
			pickUpM: plan.pickUpM + 0.5,
			fullThrottleM: fullM,
			secondLiftS: 0,
			overlapS: 0,
			coastingS: coastS,
			exitKmh: kmh(corner.endM),
			idleGapS: null,
			lockUps: null,
			timeS: null,
			plusMinus: {},
			reasons: {}
		};
	});
	return {
		grid: {
			lapNumber,
			lengthM,
			marginM: MARGIN_M,
			lapTimeS: driven.lapTimeS,
			timeS: spread(driven.timeS, [1 / startMps, 1 / lastMps]),
			speedKmh: spread(driven.mps.map((v) => v * 3.6)),
			brakePct: spread(driven.brakePct),
			throttlePct: spread(driven.throttlePct),
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

/** A corner by how it is driven: the straight before it, its minimum speed, and the way at that speed. */
export interface CornerSketch {
	straightM: number;
	minMps: number;
	plateauM: number;
}

/** Lays corners one after the other, each braked for from the speed that the straight before allows. */
export function layCircuit(sketches: readonly CornerSketch[], brakingMps2 = 9.6): Circuit {
	const plans: CornerPlan[] = [];
	const corners: Corner[] = [];
	let placeM = 0;
	let square = 45 ** 2;
	sketches.forEach(({ straightM, minMps, plateauM }, k) => {
		const onsetM = Math.round(placeM + straightM);
		const fastest = Math.min(TOP_MPS ** 2, square + 2 * FULL_MPS2 * straightM);
		const slowestM = onsetM + Math.max(fastest - minMps ** 2, 0) / (2 * brakingMps2);
		const pickUpM = Math.round(slowestM + plateauM);
		plans.push({ onsetM, minMps, pickUpM, brakingMps2, peakPct: 90, coastS: 0 });
		corners.push({
			number: k + 1,
			startM: Math.max(onsetM + 5, slowestM - 20),
			apexM: (slowestM + pickUpM) / 2,
			apex2M: null,
			endM: pickUpM + 25,
			direction: k % 2 ? 'left' : 'right',
			minRadiusM: minMps ** 2 / 12,
			angleDeg: 90,
			linkedTo: null,
			kind: 'braked'
		});
		placeM = pickUpM + 25;
		square = minMps ** 2;
	});
	return { lengthM: Math.ceil(placeM + 300), corners, plans, startMps: 45 };
}
