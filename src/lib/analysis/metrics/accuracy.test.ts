import { beforeAll, describe, expect, it } from 'vitest';
import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import { measureRun } from './measureRun.ts';
import { cornersOf, readClosedForm, sampleRun, type ClosedFormLap, type Sampling } from './testing/closedForm.ts';
import { ErrorTable } from './testing/errorTable.ts';

/**
 * Every quantity of a corner against its closed-form value, for laps sampled at several rates and phases. Bars are the product's own
 * (the |error| that 95 of 100 values must keep); truth: fixtures/closed-form.
 */
const RATES: Record<string, Omit<Sampling, 'phase'>> = {
	'100 Hz': { rateHz: 100 },
	'60 Hz': { rateHz: 60 },
	'50 Hz': { rateHz: 50 },
	'20 Hz': { rateHz: 20 },
	'10 Hz': { rateHz: 10 },
	'60 Hz noise': { rateHz: 60, noise: { speedKmh: 0.3, brakePct: 0.5 } }
};
const PHASES = [0.1, 0.35, 0.6, 0.85];

/** quantity → bars at 50 Hz and more, 20 Hz, 10 Hz, 60 Hz with noise */
const BARS: Record<string, [number, number, number, number]> = {
	'onset, m': [0.3, 1.4, 3.8, 0.5],
	'peak, %': [2, 9, 19, 3],
	'release end, ms': [20, 60, 130, 120],
	'minimum speed, km/h': [0.1, 0.1, 0.3, 0.5],
	'pick-up, m': [0.3, 0.6, 1.4, 0.5],
	'full throttle, ms': [20, 20, 50, 25],
	'coasting, ms': [15, 50, 127, 40],
	'light hold, ms': [40, 80, 160, 150],
	// not the product's bars, but a place that is wrong by more is wrong by definition
	'minimum speed place, m': [2, 3, 5, 10],
	'entry speed, km/h': [0.1, 0.1, 0.3, 0.5],
	'exit speed, km/h': [0.1, 0.1, 0.3, 0.5],
	'turn-in, m': [1, 1, 1.5, 1],
	'idle gap, ms': [100, 100, 150, 100]
};
const barOf = (quantity: string, rate: string) =>
	BARS[quantity][rate === '60 Hz noise' ? 3 : rate === '10 Hz' ? 2 : rate === '20 Hz' ? 1 : 0];

const truth = readClosedForm();
const corners = cornersOf(truth);

const away = (value: number, low: number, high: number) => Math.max(0, low - value, value - high);

/** The level held for 0.05 s around a peak, from the braking's corner points. */
function heldLevel(knots: [number, number][], peak: number): number {
	const lasts = (level: number) =>
		knots.slice(1).reduce((sum, [tb, yb], i) => {
			const [ta, ya] = knots[i];
			const [low, high] = [Math.min(ya, yb), Math.max(ya, yb)];
			return sum + (high < level ? 0 : low >= level ? tb - ta : ((tb - ta) * (high - level)) / (high - low));
		}, 0);
	let level = peak;
	while (level > 0 && lasts(level) < 0.05) level -= 0.1;
	return level;
}

function speedMpsAt(lap: ClosedFormLap, placeM: number): number {
	const segments = lap.segments_s0_s1_t0_v0_a;
	const [s0, , , v0, a] = segments.findLast((segment) => segment[0] <= placeM + 1e-9) ?? segments[0];
	return Math.sqrt(v0 * v0 + 2 * a * (placeM - s0));
}

describe('measureRun on closed-form laps', () => {
	const table = new ErrorTable();
	const ghosts = { brakes: 0, holds: 0, seconds: 0, dabs: 0, missing: 0 };

	beforeAll(() => {
		for (const [rate, sampling] of Object.entries(RATES)) {
			for (const phase of PHASES) {
				const { metrics } = measureRun(sampleRun(truth, { ...sampling, phase, seed: 1 + phase * 100 }), corners);
				Object.keys(truth.laps).forEach((motion, lap) => collect(rate, motion, metrics, lap + 1));
			}
		}
		console.log(table.print((quantity, rate) => barOf(quantity, rate)));
	}, 120_000);

	function collect(rate: string, motion: string, metrics: CornerMetrics[], lapNumber: number): void {
		const lap = truth.laps[motion];
		const changed = motion === 'link_straight';
		for (const corner of lap.corners) {
			const m = metrics.find((one) => one.lap === lapNumber && one.corner === corner.corner);
			if (!m) {
				ghosts.missing++;
				continue;
			}
			const place = corners[corner.corner - 1];
			if (changed && corner.corner === 3) table.add('idle gap, ms', rate, away((m.idleGapS ?? NaN) * 1e3, 1200, 1490));
			if (changed && (corner.corner === 3 || corner.corner === 4)) continue;
			const shift = changed && corner.corner > 4 ? (lap.altered.path_length_change_m ?? 0) : 0;
			const own = (value: number | null) => (value ?? NaN) + shift;
			const ms = (value: number | null, atM: number) => ((own(value) - atM) / speedMpsAt(lap, atM)) * 1e3;
			table.add('minimum speed, km/h', rate, (m.minKmh ?? NaN) - corner.min_speed_kmh);
			table.add('minimum speed place, m', rate, away(own(m.minSpeedM), corner.min_speed_from_m, corner.min_speed_to_m));
			table.add('entry speed, km/h', rate, (m.entryKmh ?? NaN) - 3.6 * speedMpsAt(lap, own(place.startM)));
			table.add('exit speed, km/h', rate, (m.exitKmh ?? NaN) - 3.6 * speedMpsAt(lap, own(place.endM)));
			table.add('turn-in, m', rate, (m.turnInM ?? NaN) - place.startM);
			const { brake, throttle } = corner;
			if (brake?.hold) table.add('light hold, ms', rate, ((m.lightHoldS ?? NaN) - brake.hold.duration_s) * 1e3);
			else if ((m.lightHoldS ?? 0) > 0) ghosts.holds++;
			if ((m.secondLiftS ?? 0) > 0) ghosts.seconds++;
			if (!brake) {
				if (m.onsetM !== null) ghosts.brakes++;
				continue;
			}
			if (m.dabs !== 0) ghosts.dabs++;
			table.add('onset, m', rate, own(m.onsetM) - brake.onset_at['5'].m);
			table.add('peak, %', rate, away(m.peakPct ?? NaN, heldLevel(brake.knots_s_pct, brake.peak_pct), brake.peak_pct));
			table.add('release end, ms', rate, ms(m.releaseEndM, brake.end_at['2'].m));
			table.add('pick-up, m', rate, own(m.pickUpM) - throttle.first_over_5.m);
			if (throttle.first_95) table.add('full throttle, ms', rate, ms(m.fullThrottleM, throttle.first_95.m));
			if (corner.kind === 'brake') {
				table.add('coasting, ms', rate, ((m.coastingS ?? NaN) - corner.coasting.throttle_lt5_brake_lt2_s) * 1e3);
			}
		}
	}

	it.each(Object.keys(RATES).flatMap((rate) => Object.keys(BARS).map((quantity) => ({ rate, quantity }))))(
		'keeps the bar for $quantity at $rate',
		({ rate, quantity }) => {
			const { p95, count } = table.row(quantity, rate);
			expect(count).toBeGreaterThanOrEqual(quantity.startsWith('idle') ? PHASES.length : 60);
			expect(p95).toBeLessThanOrEqual(barOf(quantity, rate));
		}
	);

	it('invents no brake, light hold, dab or second lift, and leaves no corner out', () => {
		expect(ghosts).toEqual({ brakes: 0, holds: 0, seconds: 0, dabs: 0, missing: 0 });
	});
});
