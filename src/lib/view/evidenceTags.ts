import { scaleLinear } from 'd3-scale';
import type { LapGrid } from '../analysis/model.ts';
import { speedIn, type SpeedUnit } from '../format/speed.ts';
import type { Finding } from '../schemas/analysisDocument.ts';
import type { FindingCode } from '../schemas/codes.ts';
import { nearestTurn, type PlacedCorner } from './placedCorner.ts';
import { gridValue, metresBetween, type GridColumn } from './gridValue.ts';
import { placeLabel, type Box } from './geometry/placeLabel.ts';
import { NARROW_PLOT_PX, WIDE_PLOT_PX } from './rulerView.ts';
import type { RowKey, TraceRow } from './traceRows.ts';

/** A ringed number in the chart, beside the stretch of the driver's curve that a finding speaks of. */
export interface EvidenceTag {
	number: number;
	row: RowKey;
	atM: number;
	/** px below the row's top, where the curve is */
	topPx: number;
	/** px from there to the ring's centre, on a desk's plot and on a phone's */
	wide: [number, number];
	narrow: [number, number];
}

/** Rows that show a finding, the best first; a finding that is not named here is seen in the speed. */
const ROW_OF: Partial<Record<FindingCode, readonly RowKey[]>> = {
	brake_early: ['brake', 'speed'],
	brake_late: ['brake', 'speed'],
	peak_over: ['brake'],
	peak_under: ['brake'],
	harder_no_gain: ['brake'],
	rise_quick: ['brake'],
	second_dab: ['brake'],
	pedal_change_slow: ['throttle', 'brake'],
	pedal_overlap: ['throttle', 'brake'],
	release_abrupt: ['brake'],
	release_long: ['brake'],
	release_uneven: ['brake'],
	hold_missing: ['brake'],
	hold_short: ['brake'],
	hold_strong: ['brake'],
	rear_lock: ['brake', 'speed'],
	spread_onset: ['brake', 'speed'],
	lock_up: ['brake', 'speed'],
	pick_up_late: ['throttle', 'speed'],
	pick_up_hesitant: ['throttle', 'speed'],
	lift_extra: ['throttle', 'speed'],
	second_lift: ['throttle', 'speed'],
	coasting: ['throttle', 'speed'],
	idle_gap: ['throttle', 'speed']
};

/** A placement in one row: the curves of both laps in px, and what is taken. */
export interface RowCanvas {
	row: TraceRow;
	plotPx: number;
	fromM: number;
	toM: number;
	driver: LapGrid;
	reference: LapGrid;
	speedUnit: SpeedUnit;
	/** both curves in px */
	points: readonly (readonly [number, number])[];
	boxes: Box[];
}

export type RowValues = Pick<RowCanvas, 'row' | 'speedUnit'>;

/** A row ready for placing: its curves in px, and nothing taken yet. */
export function rowCanvas(given: Omit<RowCanvas, 'points' | 'boxes'>): RowCanvas {
	return { ...given, points: curvePoints(given), boxes: [] };
}

const COLUMN: Record<RowKey, GridColumn> = {
	brake: 'brakePct',
	speed: 'speedKmh',
	throttle: 'throttlePct',
	steering: 'steeringDeg'
};
const RING_PX = 20;
/** First choice of a ring, by what the finding is about: before the rise, over the peak, under the dip. */
const DIRECTIONS: Record<'before' | 'above' | 'below', number[]> = {
	before: [180, 200, 160, 135, 225, 90, 45, 0, 315, 270],
	above: [45, 60, 30, 90, 135, 0, 180, 315, 225, 270],
	below: [0, 30, 330, 60, 300, 90, 270, 120, 180, 240]
};
const LEANING: Partial<Record<FindingCode, keyof typeof DIRECTIONS>> = {
	brake_early: 'before',
	brake_late: 'before',
	rise_quick: 'before',
	min_speed_low: 'below',
	pick_up_late: 'below'
};

/** Pixel points of both curves of a row: what a label should not cover. The highlighter is broad, so it counts thrice. */
function curvePoints(canvas: Omit<RowCanvas, 'points' | 'boxes'>): [number, number][] {
	const { row, plotPx, fromM, toM } = canvas;
	const x = scaleLinear([fromM, toM], [0, plotPx]);
	const y = scaleLinear(row.domain, [row.heightPx, 0]);
	const points: [number, number][] = [];
	for (const placeM of metresBetween(fromM, toM)) {
		const pen = y(valueOf(canvas, canvas.driver, placeM));
		const marker = y(valueOf(canvas, canvas.reference, placeM));
		if (Number.isFinite(pen)) points.push([x(placeM), pen]);
		if (Number.isFinite(marker)) points.push([x(placeM), marker - 4], [x(placeM), marker], [x(placeM), marker + 4]);
	}
	return points;
}

export function valueOf({ row, speedUnit }: RowValues, grid: LapGrid, placeM: number): number {
	const value = gridValue(grid, COLUMN[row.key], placeM);
	return row.key === 'speed' ? speedIn(value, speedUnit) : value;
}

/** The metric that a finding points at where its evidence has no place of its own. */
const POINTS_AT: Partial<Record<FindingCode, PlaceField>> = {
	peak_over: 'peakM',
	peak_under: 'peakM',
	rise_quick: 'onsetM',
	second_dab: 'peakM',
	release_abrupt: 'releaseEndM',
	release_long: 'releaseEndM',
	release_uneven: 'releaseEndM',
	hold_missing: 'releaseEndM',
	hold_short: 'releaseEndM',
	hold_strong: 'releaseEndM',
	harder_no_gain: 'peakM',
	rear_lock: 'peakM',
	spread_onset: 'onsetM',
	spread_min_speed: 'minSpeedM',
	pedal_change_slow: 'liftM',
	pedal_overlap: 'onsetM',
	pick_up_hesitant: 'fullThrottleM',
	lock_up: 'peakM',
	min_speed_low: 'minSpeedM',
	entry_fast: 'turnInM',
	coasting: 'liftM',
	second_lift: 'fullThrottleM'
};
type PlaceField = 'onsetM' | 'peakM' | 'releaseEndM' | 'minSpeedM' | 'turnInM' | 'liftM' | 'fullThrottleM';

/** Where a finding's ring belongs: row and place; null where it has no place in the window or its row has no curve. */
export function evidencePlace(
	{ code, evidence }: Pick<Finding, 'code' | 'evidence'>,
	rows: readonly TraceRow[],
	window: { fromM: number; toM: number },
	{ apexM, endM, driver }: PlacedCorner,
	lengthM: number,
	closed: boolean
): { row: TraceRow; atM: number } | null {
	// Braking that begins with a lift alone is seen at the throttle.
	const rowKeys: readonly RowKey[] =
		evidence[0]?.quantity === 'lift' ? ['throttle', 'speed'] : (ROW_OF[code] ?? ['speed']);
	const row = rowKeys.map((key) => rows.find((r) => r.key === key && r.driver !== '')).find(Boolean);
	const field = POINTS_AT[code];
	const measured = field ? driver?.[field] : null;
	const stated = evidence.find((item) => item.atM !== null)?.atM ?? null;
	// An exit is slow where it ends; a card that cuts it points at what led to it.
	const raw = code === 'exit_speed_low' && endM <= window.toM ? endM : (measured ?? stated);
	if (!row || raw === null) return null;
	const atM = nearestTurn(raw, apexM, lengthM, closed);
	return atM >= window.fromM && atM <= window.toM ? { row, atM } : null;
}

/**
 * Puts a ring beside the driver's curve where it covers the least.
 *
 * @param canvases the row at a desk's width and at a phone's; the ring's box is added to each
 */
export function placeTag(
	number: number,
	code: FindingCode,
	atM: number,
	canvases: { wide: RowCanvas; narrow: RowCanvas }
): EvidenceTag {
	const { row } = canvases.wide;
	const y = scaleLinear(row.domain, [row.heightPx, 0]);
	const value = valueOf(canvases.wide, canvases.wide.driver, atM);
	// An onset is at the foot of the curve; the ring stands half-way up the rise that it begins.
	const lifted = LEANING[code] === 'before' && row.key === 'brake' ? Math.max(value, 42) : value;
	const topPx = Math.round(Number.isFinite(lifted) ? y(lifted) : row.heightPx / 2);
	const offset = (canvas: RowCanvas): [number, number] => {
		const x = scaleLinear([canvas.fromM, canvas.toM], [0, canvas.plotPx])(atM);
		const candidates = [17, 24].flatMap((reach, far) =>
			DIRECTIONS[LEANING[code] ?? 'above'].map((degrees, order) => {
				const dx = Math.cos((degrees * Math.PI) / 180) * reach;
				const dy = -Math.sin((degrees * Math.PI) / 180) * reach;
				return {
					x: x + dx - RING_PX / 2,
					y: topPx + dy - RING_PX / 2,
					width: RING_PX,
					height: RING_PX,
					penalty: far * 1.5 + order * 0.2,
					shift: [Math.round(dx), Math.round(dy)] as [number, number]
				};
			})
		);
		const frame = { x: 0, y: -8, width: canvas.plotPx, height: row.heightPx + 32 };
		const { chosen } = placeLabel(candidates, { points: canvas.points, boxes: canvas.boxes, frame });
		canvas.boxes.push(chosen);
		return chosen.shift;
	};
	return { number, row: row.key, atM, topPx, wide: offset(canvases.wide), narrow: offset(canvases.narrow) };
}

export const TAG_PLOTS = { wide: WIDE_PLOT_PX, narrow: NARROW_PLOT_PX };
