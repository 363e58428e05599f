import { passing, pedalAt, readClosedForm, type ClosedFormTruth } from '../../src/cli/accuracy/closedFormTruth.ts';
import type { LapGrid } from '../../src/lib/analysis/model.ts';
import type { Corner, CornerMetrics } from '../../src/lib/schemas/analysisDocument.ts';

/**
 * The laps of `fixtures/closed-form` evaluated from their formulas, without files, parser or corner finder between: what the
 * comparison says of them can be held against exact values.
 */

export { readClosedForm, type ClosedFormTruth };

/** One lap on the 1 m grid; before and after the line the car goes on as in the same lap. */
export function closedFormGrid(truth: ClosedFormTruth, motion: string, lapNumber: number, marginM = 250): LapGrid {
	const lap = truth.laps[motion];
	const lengthM = truth.length_m;
	const n = Math.floor(lengthM) + 1 + 2 * marginM;
	const column = () => new Float64Array(n);
	const timeS = column();
	const speedKmh = column();
	const brakePct = column();
	const throttlePct = column();
	for (let i = 0; i < n; i++) {
		const placeM = i - marginM;
		const turn = Math.floor(placeM / lengthM);
		const { timeS: at, speedMps } = passing(lap, placeM - turn * lengthM);
		timeS[i] = at + turn * lap.lap_time_s;
		speedKmh[i] = speedMps * 3.6;
		brakePct[i] = pedalAt(lap.brake_knots_s_pct, at);
		throttlePct[i] = pedalAt(lap.throttle_knots_s_pct, at);
	}
	return {
		lapNumber,
		lengthM,
		marginM,
		lapTimeS: lap.lap_time_s,
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
	};
}

/** The circuit's corners as the corner finder should give them. */
export function closedFormCorners(truth: ClosedFormTruth): Corner[] {
	return truth.corners.map((corner) => ({
		number: corner.corner,
		startM: corner.start_m,
		apexM: corner.apex_m,
		apex2M: null,
		endM: corner.end_m,
		direction: corner.direction,
		minRadiusM: corner.radius_m,
		angleDeg: Math.abs(corner.angle_deg),
		linkedTo: corner.corner === 3 ? 4 : corner.corner === 4 ? 5 : null,
		kind: 'braked'
	}));
}

/** The exact corner metrics of one lap. */
export function closedFormMetrics(truth: ClosedFormTruth, motion: string, lapNumber: number): CornerMetrics[] {
	return truth.laps[motion].corners.map((corner) => {
		const { brake, throttle, coasting } = corner;
		const releaseEnd = brake?.end_at['2'];
		return {
			lap: lapNumber,
			corner: corner.corner,
			onsetM: brake?.onset_at['5'].m ?? null,
			onsetS: brake?.onset_at['5'].s ?? null,
			peakPct: brake?.peak_pct ?? null,
			peakRawPct: brake?.peak_pct ?? null,
			peakM: brake?.peak_first_m ?? null,
			riseS: brake?.ramp_s ?? null,
			releaseStartM: brake?.release_start_m ?? null,
			releaseEndM: releaseEnd?.m ?? null,
			releaseS: brake && releaseEnd ? releaseEnd.s - brake.release_start_s : null,
			releaseProgressive: null,
			dabs: brake ? 0 : null,
			lightHoldS: brake ? (brake.hold?.duration_s ?? 0) : null,
			trailS: null,
			trailM: null,
			turnInM: corner.start_m,
			entryKmh: corner.entry_speed_kmh,
			minKmh: corner.min_speed_kmh,
			minSpeedM: corner.min_speed_from_m,
			liftM: throttle?.lift_end_m ?? null,
			smallestOpeningPct: null,
			smallestOpeningM: null,
			pickUpM: throttle?.first_over_5.m ?? null,
			fullThrottleM: throttle?.first_95?.m ?? null,
			secondLiftS: 0,
			overlapS: 0,
			coastingS: coasting?.throttle_lt5_brake_lt2_s ?? null,
			exitKmh: corner.exit_speed_kmh,
			idleGapS: null,
			lockUps: null,
			timeS: corner.corner_time_s,
			plusMinus: {},
			reasons: {}
		};
	});
}
