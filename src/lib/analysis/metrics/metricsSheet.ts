import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { MetricReason } from '../../schemas/codes.ts';
import { KMH_PER_MPS } from '../../units.ts';
import { placeAtTime } from '../trace/placeTime.ts';
import type { CornerPassage } from './cornerPassages.ts';
import type { Moment } from './crossing.ts';
import { touchesHole, type MeasuredRun } from './measuredRun.ts';
import { speedAt } from './steadySpeed.ts';

/** Fields of a corner that are numbers or null. */
export type MetricField = Exclude<
	keyof CornerMetrics,
	'lap' | 'corner' | 'releaseProgressive' | 'lockWheels' | 'plusMinus' | 'reasons'
>;

/** The metrics of one passage while they are being filled in: every field null until it is set, or explained. */
export class MetricsSheet {
	readonly metrics: CornerMetrics;
	readonly #run: MeasuredRun;
	readonly #passage: CornerPassage;

	constructor(run: MeasuredRun, passage: CornerPassage) {
		this.#run = run;
		this.#passage = passage;
		this.metrics = emptyMetrics(passage);
	}

	/**
	 * Sets a field, or, where the value is not a number, leaves it null and says why. A time that states no ± of its own is known to half of
	 * a sampling interval.
	 */
	set(field: MetricField, value: number | null, reason: MetricReason, plusMinus = 0): void {
		if (value !== null && Number.isFinite(value)) {
			this.metrics[field] = value;
			const known = plusMinus > 0 ? plusMinus : field.endsWith('S') ? this.#run.speed.sampleS / 2 : 0;
			if (known > 0) this.metrics.plusMinus[field] = known;
		} else {
			this.metrics.reasons[field] = reason;
		}
	}

	/** Sets a field to the place of a moment, counted from the line of the lap. */
	setPlace(field: MetricField, moment: (Pick<Moment, 'timeS'> & Partial<Moment>) | null, reason: MetricReason): void {
		if (!moment) return this.set(field, null, reason);
		if (touchesHole(this.#run, moment.timeS)) return this.set(field, null, 'gap');
		// a moment that states no ± lies within half of a sampling interval
		const { timeS, plusMinusS = this.#run.speed.sampleS / 2 } = moment;
		const spreadM = plusMinusS > 0 ? (speedAt(this.#run.speed, timeS) / KMH_PER_MPS) * plusMinusS : 0;
		this.set(field, placeAtTime(this.#run.placed, timeS) - this.#passage.baseM, reason, spreadM);
	}

	/** Says why fields are null, or with what reservation they stand. */
	explain(fields: readonly (keyof CornerMetrics)[], reason: MetricReason): void {
		for (const field of fields) this.metrics.reasons[field] = reason;
	}
}

function emptyMetrics({ lap, corner }: CornerPassage): CornerMetrics {
	return {
		lap: lap?.number ?? 0,
		corner: corner.number,
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
		timeS: null,
		coastBeforeS: null,
		coastBetweenS: null,
		coastAfterS: null,
		holdPct: null,
		brakedMps2: null,
		spinS: null,
		steerCorrections: null,
		rearLocks: null,
		lockWheels: null,
		plusMinus: {},
		reasons: {}
	};
}
