import { describe, expect, it } from 'vitest';
import { channelsOf } from '../metrics/testing/channelsOf.ts';
import { seededNormal } from '../metrics/testing/seededNormal.ts';
import { fadeWatch } from './fadeWatch.ts';

/** Stops from 200 km/h every 20 s, with drag 0.0012·v² beside the brakes, whose effect changes evenly over the run. */
function stops(minutes: number, lostShare: number, more: { peakPct?: (k: number) => number; unit?: 'switch' } = {}) {
	const rateHz = 25;
	const normal = seededNormal(11);
	const timeS: number[] = [];
	const speedKmh: number[] = [];
	const brakePct: number[] = [];
	const n = Math.floor(minutes * 60 * rateHz);
	let mps = 55;
	for (let i = 0; i < n; i++) {
		const atS = i / rateHz;
		const stop = Math.floor(atS / 20);
		const brake = atS % 20 > 15 && atS % 20 < 18 ? (more.peakPct?.(stop) ?? 70) : 0;
		const effect = 0.13 * (1 - (lostShare * i) / n) * brake;
		timeS.push(atS);
		speedKmh.push(mps * 3.6 + 0.1 * normal());
		brakePct.push(brake);
		mps = Math.max(8, brake > 0 ? mps - (effect + 0.0012 * mps * mps) / rateHz : Math.min(55, mps + 5 / rateHz));
	}
	const channels = channelsOf({ timeS, speedKmh, brakePct });
	return more.unit ? { ...channels, brakeUnit: more.unit } : channels;
}

describe('fadeWatch', () => {
	it.each([0.15, 0.25])(
		'measures a loss of %d of the brakes’ effect over twelve minutes, and calls it a sign',
		(lost) => {
			const watch = fadeWatch(stops(12, lost));
			expect(watch?.sign).toBe(true);
			// drag slows beside the brakes, so that the share of all deceleration is a little less than the brakes'
			expect(watch?.changeShare).toBeGreaterThan(-lost - 0.02);
			expect(watch?.changeShare).toBeLessThan(-0.65 * lost);
		}
	);

	it('sees no sign where nothing fades, even where the driver presses ever more', () => {
		const steady = fadeWatch(stops(12, 0));
		expect(steady?.sign).toBe(false);
		expect(Math.abs(steady?.changeShare ?? 1)).toBeLessThan(0.03);
		expect(fadeWatch(stops(12, 0, { peakPct: (k) => 55 + k }))?.sign).toBe(false);
	});

	it('says nothing of a short run, or of an on/off brake', () => {
		expect(fadeWatch(stops(2, 0.3))).toBeNull();
		expect(fadeWatch(stops(12, 0.3, { unit: 'switch' }))).toBeNull();
		expect(fadeWatch({ ...stops(12, 0.3), brakePct: null })).toBeNull();
	});
});
