import type { Channels } from '../../model.ts';

/** Columns of a made-up run as plain arrays. */
export interface MadeUpColumns {
	timeS: ArrayLike<number>;
	speedKmh: ArrayLike<number>;
	distanceM?: ArrayLike<number>;
	brakePct?: ArrayLike<number> | null;
	throttlePct?: ArrayLike<number> | null;
	steeringDeg?: ArrayLike<number> | null;
	yawRateRadps?: ArrayLike<number> | null;
}

/** Channels of a made-up run, for tests: what is not given is absent; distance is integrated from speed by trapezoids. */
export function channelsOf(columns: MadeUpColumns): Channels {
	const timeS = Float64Array.from(columns.timeS);
	const speedKmh = Float64Array.from(columns.speedKmh);
	const column = (values: ArrayLike<number> | null | undefined) => (values ? Float64Array.from(values) : null);
	const distanceM = new Float64Array(timeS.length);
	for (let i = 1; i < timeS.length; i++) {
		distanceM[i] = distanceM[i - 1] + ((speedKmh[i] + speedKmh[i - 1]) / 7.2) * (timeS[i] - timeS[i - 1]);
	}
	const gaps = timeS.slice(1).map((t, i) => t - timeS[i]);
	return {
		timeS,
		speedKmh,
		distanceM: column(columns.distanceM) ?? distanceM,
		distanceMeasured: columns.distanceM !== undefined,
		brakePct: column(columns.brakePct),
		brakeUnit: columns.brakePct ? 'pct' : null,
		brakeFull: null,
		brakeScaleAssumed: false,
		throttlePct: column(columns.throttlePct),
		steeringDeg: column(columns.steeringDeg),
		gear: null,
		engineSpeedRpm: null,
		xM: null,
		yM: null,
		origin: null,
		accLongMps2: null,
		accLatMps2: null,
		yawRateRadps: column(columns.yawRateRadps),
		wheelKmh: null,
		lapColumn: null,
		beacon: null,
		lapDistanceM: null,
		lapTimeColumnS: null,
		sampleRateHz: 1 / gaps.sort()[gaps.length >> 1],
		source: {
			rows: timeS.length,
			sampleRateHz: NaN,
			columns: [],
			warnings: [],
			encoding: 'utf-8',
			delimiter: ',',
			decimal: '.',
			headerRow: 1,
			metadata: {}
		},
		warnings: []
	};
}
