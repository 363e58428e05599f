import type { LapGrid } from '../model.ts';

/** Δ over one lap: driver minus reference, positive is time lost. */
export interface DeltaTrace {
	lengthM: number;
	/** Δ at i m, i = 0 … floor(lengthM), s; never NaN */
	deltaS: Float64Array;
	/** Δ at the line, s */
	finalS: number;
	/** where neither lap lacks samples: entry i says whether Δ at i m was measured (1) or bridged (0) */
	measured: Uint8Array;
}

/**
 * Time delta between two laps on the same path.
 *
 * Both grids hold the time since their own crossing of the line, so Δ is their difference place by place; it is 0 at the line
 * before and the difference of the exact lap times at the line after. Where a lap lacks samples Δ is bridged by a straight line.
 *
 * @param driver    lap on the path's 1 m grid
 * @param reference lap on the same grid
 * @throws {RangeError} if the two laps lie on paths of different length
 */
export function deltaTrace(driver: LapGrid, reference: LapGrid): DeltaTrace {
	const { lengthM } = reference;
	if (!(Math.abs(driver.lengthM - lengthM) < 1e-6))
		throw new RangeError(`deltaTrace requires two laps on one path, got lengths ${driver.lengthM} m and ${lengthM} m`);
	const n = Math.floor(lengthM + 1e-9) + 1;
	const finalS = driver.lapTimeS - reference.lapTimeS;
	const deltaS = new Float64Array(n);
	const measured = new Uint8Array(n);
	for (let i = 0; i < n; i++) {
		deltaS[i] = driver.timeS[i + driver.marginM] - reference.timeS[i + reference.marginM];
		measured[i] = Number.isNaN(deltaS[i]) ? 0 : 1;
	}
	// the line itself is where both clocks start, and where they are read
	deltaS[0] = 0;
	if (n - 1 > lengthM - 1e-6) deltaS[n - 1] = finalS;
	bridge(deltaS, lengthM, finalS);
	return { lengthM, deltaS, finalS, measured };
}

function bridge(deltaS: Float64Array, lengthM: number, finalS: number): void {
	for (let i = 1; i < deltaS.length; i++) {
		if (!Number.isNaN(deltaS[i])) continue;
		let next = i + 1;
		while (next < deltaS.length && Number.isNaN(deltaS[next])) next++;
		const to = next < deltaS.length ? { m: next, s: deltaS[next] } : { m: lengthM, s: finalS };
		const from = { m: i - 1, s: deltaS[i - 1] };
		for (; i < next; i++) deltaS[i] = from.s + ((to.s - from.s) * (i - from.m)) / Math.max(to.m - from.m, 1e-9);
	}
}

/**
 * Δ at any place of the lap, linear between the grid's metres.
 *
 * @param placeM held to 0 … lengthM
 */
export function deltaAt(trace: DeltaTrace, placeM: number): number {
	const { deltaS, lengthM, finalS } = trace;
	if (!(placeM > 0)) return deltaS[0];
	if (placeM >= lengthM) return finalS;
	const i = Math.min(Math.floor(placeM), deltaS.length - 1);
	const last = i === deltaS.length - 1;
	const stepM = last ? lengthM - i : 1;
	const to = last ? finalS : deltaS[i + 1];
	return deltaS[i] + ((to - deltaS[i]) * (placeM - i)) / stepM;
}
