import { UNITS_PER_PX, WIDTH_UNITS } from './geometry/units.ts';
import { scaleLinear } from 'd3-scale';
import { formatDelta, deltaWord, type DeltaWord } from '../format/delta.ts';
import { deltaAt, metresBetween } from './gridValue.ts';
import { polygonClip } from './geometry/polygonClip.ts';
import { tracePath } from './geometry/tracePath.ts';
import type { LapGrid } from '../analysis/model.ts';

/** The row of time: what the corner has cost since its span began. Lost goes up. */
export interface DeltaRow {
	heightPx: number;
	/** s at the foot and at the top; the same on all cards of a lap, so that cards compare */
	domain: [number, number];
	/** m: drawn from here to here */
	fromM: number;
	toM: number;
	/** the curve, in tenths of a pixel */
	line: string;
	/** CSS polygon of what lies above zero, to clip the hatch; null where nothing does */
	lostClip: string | null;
	/** CSS polygon of what lies below zero; null where nothing does */
	foundClip: string | null;
	/** where the curve ends: value, words, and m */
	end: { deltaS: number; text: string; word: DeltaWord };
}

export interface DeltaInput {
	driver: LapGrid;
	reference: LapGrid;
	/** the card's window, m */
	windowM: [number, number];
	/** the ledger's span, m */
	spanM: [number, number];
	domain: [number, number];
	heightPx?: number;
}

/** A thousandth either way is not worth an area. */
const VISIBLE_S = 0.001;

/** Draws Δ from the span's beginning; see DeltaRow. A gap in either lap leaves the stretch before it. */
export function deltaRow({ driver, reference, windowM, spanM, domain, heightPx = 52 }: DeltaInput): DeltaRow {
	const fromM = Math.max(windowM[0], spanM[0]);
	const toM = Math.max(fromM, Math.min(windowM[1], spanM[1]));
	const zero = deltaAt(driver, reference, spanM[0]);
	const places = [...new Set([fromM, ...metresBetween(fromM, toM), toM])];
	const values = places.map((placeM) => deltaAt(driver, reference, placeM) - zero);
	const known = values.findIndex((value) => !Number.isFinite(value));
	const placesM = known < 0 ? places : places.slice(0, known);
	const deltas = known < 0 ? values : values.slice(0, known);
	const x = scaleLinear(windowM, [0, 1]);
	const y = scaleLinear(domain, [1, 0]);
	const side = (keep: (value: number) => number): string | null => {
		const kept = deltas.map(keep);
		if (!kept.some((value) => Math.abs(value) > VISIBLE_S)) return null;
		return polygonClip(
			placesM.map((placeM) => x(placeM)),
			kept.map((value) => y(value)),
			y(0)
		);
	};
	const last = deltas.length > 0 ? deltas[deltas.length - 1] : NaN;
	return {
		heightPx,
		domain,
		fromM,
		toM: placesM.length > 0 ? placesM[placesM.length - 1] : fromM,
		line: tracePath({
			placesM,
			values: deltas,
			x: (placeM) => x(placeM) * WIDTH_UNITS,
			y: (value) => y(value) * heightPx * UNITS_PER_PX
		}),
		lostClip: side((value) => Math.max(0, value)),
		foundClip: side((value) => Math.min(0, value)),
		end: { deltaS: last, text: formatDelta(last), word: deltaWord(last) }
	};
}

/**
 * One scale of time for all corners of a lap: from the most that any corner gives to the most that any costs, within its span,
 * never less than a tenth of a second in all, rounded out to 0.02 s.
 */
export function deltaDomain(
	driver: LapGrid,
	reference: LapGrid,
	spansM: readonly [number, number][]
): [number, number] {
	let low = 0;
	let high = 0;
	for (const [fromM, toM] of spansM) {
		const zero = deltaAt(driver, reference, fromM);
		for (const placeM of [...metresBetween(fromM, toM), toM]) {
			const value = deltaAt(driver, reference, placeM) - zero;
			if (value < low) low = value;
			if (value > high) high = value;
		}
	}
	const out = (value: number, round: (v: number) => number): number => round(Math.round(value * 1e6) / 2e4) / 50 + 0;
	const domain: [number, number] = [out(low, Math.floor), out(high, Math.ceil)];
	if (domain[1] - domain[0] < 0.1) domain[1] = Math.round((domain[0] + 0.1) * 100) / 100;
	return domain;
}
