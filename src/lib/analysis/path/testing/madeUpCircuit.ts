import type { Channels } from '../../model.ts';
import { channelsOf } from '../../metrics/testing/channelsOf.ts';
import { seededNormal } from '../../metrics/testing/seededNormal.ts';

/** A stretch of a plan: length in m, curvature at its start and end in 1/m, left positive, changing evenly between. */
export type Element = readonly [lengthM: number, from: number, to: number];

/** A closed plan known exactly, point by point. */
export interface MadeUpCircuit {
	lengthM: number;
	/** centre line at a place, which wraps */
	at(placeM: number): { xM: number; yM: number; headingRad: number; curvaturePerM: number };
}

/** A corner of constant radius with even transitions, which turns by an angle (left positive). */
export function cornerElements(angleDeg: number, radiusM: number, transitionM: number): Element[] {
	const sign = Math.sign(angleDeg);
	const arcM = (Math.abs(angleDeg) * Math.PI * radiusM) / 180 - transitionM;
	if (!(arcM >= 0))
		throw new RangeError(`a corner of ${angleDeg}° and ${radiusM} m has no room for ${transitionM} m of transition`);
	const tight = sign / radiusM;
	return [
		[transitionM, 0, tight],
		[arcM, tight, tight],
		[transitionM, tight, 0]
	];
}

export const straight = (lengthM: number): Element => [lengthM, 0, 0];

/**
 * A circuit that repeats a pattern until it has turned once round: it closes by symmetry, whatever the pattern is.
 *
 * @param pattern elements that together turn by 360°/times, to either hand
 */
export function symmetricCircuit(pattern: Element[], times: number): MadeUpCircuit {
	const elements = Array.from({ length: times }, () => pattern).flat();
	const starts: { placeM: number; xM: number; yM: number; headingRad: number }[] = [];
	let here = { placeM: 0, xM: 0, yM: 0, headingRad: 0 };
	for (const element of elements) {
		starts.push(here);
		const end = along(element, element[0], here.headingRad);
		here = {
			placeM: here.placeM + element[0],
			xM: here.xM + end.dx,
			yM: here.yM + end.dy,
			headingRad: end.headingRad
		};
	}
	const lengthM = here.placeM;
	return {
		lengthM,
		at(place) {
			const placeM = place - Math.floor(place / lengthM) * lengthM;
			let low = 0;
			let high = starts.length - 1;
			while (low < high) {
				const middle = (low + high + 1) >> 1;
				if (starts[middle].placeM <= placeM) low = middle;
				else high = middle - 1;
			}
			const start = starts[low];
			const [length, from, to] = elements[low];
			const into = placeM - start.placeM;
			const { dx, dy, headingRad } = along(elements[low], into, start.headingRad);
			return {
				xM: start.xM + dx,
				yM: start.yM + dy,
				headingRad,
				curvaturePerM: from + ((to - from) * into) / length
			};
		}
	};
}

/** Way covered within an element: ∫ cos, ∫ sin of the heading by Gauss–Legendre with five points on pieces of a metre or two. */
function along(
	[length, from, to]: Element,
	into: number,
	headingRad: number
): { dx: number; dy: number; headingRad: number } {
	const heading = (u: number) => headingRad + from * u + ((to - from) * u * u) / (2 * length);
	const pieces = from === 0 && to === 0 ? 1 : Math.max(1, Math.ceil(into / 2));
	const step = into / pieces;
	let dx = 0;
	let dy = 0;
	for (let p = 0; p < pieces; p++) {
		GAUSS.forEach(([node, weight]) => {
			const angle = heading((p + 0.5 + node / 2) * step);
			dx += (weight / 2) * step * Math.cos(angle);
			dy += (weight / 2) * step * Math.sin(angle);
		});
	}
	return { dx, dy, headingRad: heading(into) };
}

/** Nodes and weights of Gauss–Legendre quadrature with five points (Abramowitz and Stegun, table 25.4). */
const GAUSS: readonly (readonly [number, number])[] = [
	[0, 0.5688888888888889],
	[0.5384693101056831, 0.47862867049936647],
	[-0.5384693101056831, 0.47862867049936647],
	[0.906179845938664, 0.23692688505618908],
	[-0.906179845938664, 0.23692688505618908]
];

export interface Drive {
	rateHz: number;
	/** from this many laps to that many, 0 at the line */
	fromLap: number;
	toLap: number;
	/** speed at a place, m/s */
	speedMps(placeM: number): number;
	/** distance from the centre line by unwrapped place, left positive, m; slowly changing */
	offsetM?(placeM: number): number;
	/** share of a sampling interval by which sampling starts late */
	phase?: number;
	/** turned and moved as a whole */
	turnRad?: number;
	moveM?: readonly [number, number];
	positionNoiseM?: number;
	speedNoiseKmh?: number;
	seed?: number;
	brakePct?(placeM: number): number;
	throttlePct?(placeM: number): number;
}

/** A drive and what is true of it. */
export interface Driven {
	channels: Channels;
	/** true place of each sample, unwrapped */
	placeM: Float64Array;
	/** true time at an unwrapped place, s from the first sample */
	timeAt(placeM: number): number;
}

/** Way on which time is integrated, m. */
const STEP_M = 0.25;

/** Drives a circuit: positions, speed and true times, sampled evenly. Speed is that of the place along the centre line. */
export function drive(circuit: MadeUpCircuit, options: Drive): Driven {
	const { rateHz, fromLap, toLap, phase = 0, turnRad = 0, moveM = [0, 0], seed = 1 } = options;
	const startM = fromLap * circuit.lengthM;
	const steps = Math.ceil(((toLap - fromLap) * circuit.lengthM) / STEP_M);
	// t(s) by Simpson's rule on 1/v
	const times = new Float64Array(steps + 1);
	const slowness = (placeM: number) => 1 / options.speedMps(placeM);
	for (let k = 0; k < steps; k++) {
		const s = startM + k * STEP_M;
		times[k + 1] = times[k] + ((slowness(s) + 4 * slowness(s + STEP_M / 2) + slowness(s + STEP_M)) * STEP_M) / 6;
	}
	const placeAt = (t: number) => {
		let low = 0;
		let high = steps - 1;
		while (low < high) {
			const middle = (low + high + 1) >> 1;
			if (times[middle] <= t) low = middle;
			else high = middle - 1;
		}
		const s = startM + low * STEP_M;
		const [v0, v1] = [options.speedMps(s), options.speedMps(s + STEP_M)];
		const since = t - times[low];
		return s + v0 * since + (((v1 * v1 - v0 * v0) / (2 * STEP_M)) * since * since) / 2;
	};
	const normal = seededNormal(seed);
	const count = Math.floor(times[steps] * rateHz - phase) + 1;
	const columns = { timeS: new Float64Array(count), speedKmh: new Float64Array(count) };
	const placeM = new Float64Array(count);
	const xM = new Float64Array(count);
	const yM = new Float64Array(count);
	for (let i = 0; i < count; i++) {
		columns.timeS[i] = i / rateHz;
		const place = placeAt((i + phase) / rateHz);
		placeM[i] = place;
		const centre = circuit.at(place);
		const offset = options.offsetM?.(place) ?? 0;
		const slope = ((options.offsetM?.(place + 0.5) ?? 0) - (options.offsetM?.(place - 0.5) ?? 0)) / 1;
		const x = centre.xM - offset * Math.sin(centre.headingRad);
		const y = centre.yM + offset * Math.cos(centre.headingRad);
		// a car beside the centre line drives a longer or shorter way
		const own = options.speedMps(place) * Math.hypot(1 - centre.curvaturePerM * offset, slope);
		const noise = options.positionNoiseM ?? 0;
		xM[i] = x * Math.cos(turnRad) - y * Math.sin(turnRad) + moveM[0] + noise * (noise && normal());
		yM[i] = x * Math.sin(turnRad) + y * Math.cos(turnRad) + moveM[1] + noise * (noise && normal());
		columns.speedKmh[i] = own * 3.6 + (options.speedNoiseKmh ? options.speedNoiseKmh * normal() : 0);
	}
	const pedal = (course?: (placeM: number) => number) => (course ? Float64Array.from(placeM, course) : null);
	const channels: Channels = {
		...channelsOf({ ...columns, brakePct: pedal(options.brakePct), throttlePct: pedal(options.throttlePct) }),
		xM,
		yM
	};
	const timeAt = (place: number) => {
		const k = Math.min(Math.max(Math.floor((place - startM) / STEP_M), 0), steps - 1);
		const s = startM + k * STEP_M;
		const [v0, v1] = [options.speedMps(s), options.speedMps(s + STEP_M)];
		const acceleration = (v1 * v1 - v0 * v0) / (2 * STEP_M);
		const way = place - s;
		return times[k] + (2 * way) / (v0 + Math.sqrt(v0 * v0 + 2 * acceleration * way)) - phase / rateHz;
	};
	return { channels, placeM, timeAt };
}
