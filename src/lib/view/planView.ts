import { UNITS_PER_PX } from './geometry/units.ts';
import { formatDistance } from '../format/distance.ts';
import { formatNumber } from '../format/number.ts';
import type { ComparisonView, CornerView } from '../schemas/views.ts';
import type { PlacedCorner } from './placedCorner.ts';
import type { CornerWindow } from './cornerWindow.ts';
import { CompactPath } from './geometry/CompactPath.ts';
import { pathPoint } from './geometry/pathPoint.ts';
import { placeLabel, type Box } from './geometry/placeLabel.ts';
import type { PlanFrame } from './geometry/planFrame.ts';
import { rulerTicks, type RulerTick } from './rulerView.ts';
import { cornerFrame, handAt, planRibbon, planTrack, RIBBON, stretchLines } from './planLines.ts';

export interface PlanLabel {
	text: string;
	kind: 'name' | 'metre' | 'driver' | 'reference';
	/** px in the drawing: the point that the text hangs on */
	x: number;
	y: number;
	anchor: 'start' | 'middle' | 'end';
}

/** The corner from above, its entry running up. Paths in tenths of a pixel; nothing is drawn that was not measured. */
export interface PlanView {
	widthPx: number;
	heightPx: number;
	reference: string;
	driver: string;
	/** metre ticks beside the outer line */
	ticks: string;
	/** turn-in and corner end, across the lines */
	crossings: string;
	/** the apex, a solid wedge at the inside */
	apex: string;
	/** from a line to its label */
	leaders: string;
	labels: PlanLabel[];
	scale: { x: number; y: number; lengthPx: number; text: string };
	/** both lines for the cursor: px, first point and then steps, in tenths; null is a gap */
	track: { fromM: number; stepM: number; driver: (number | null)[]; reference: (number | null)[] };
	/** said under the plan where both lines lie on the layout's path */
	note: string | null;
}

const SIZE = { widthPx: 372, heightPx: [300, 470] as [number, number] };
const PADDING: [number, number, number, number] = [26, 30, 22, 62];
/** px per character of 12 px Public Sans, generous */
const CHARACTER_PX = 6.6;
const LINE_PX = 15;
/** a label that covers more than this is left out */
const MOST_COVERED = 7;

/**
 * Draws a corner from above; see PlanView.
 *
 * @returns null where the layout has no shape (speed only): a sentence stands in its place
 */
export function planView(
	view: ComparisonView,
	corner: CornerView,
	places: PlacedCorner,
	window: CornerWindow
): PlanView | null {
	if (view.path.origin === 'speedOnly') return null;
	const { fromM, toM } = window;
	const { path, driverGrid, referenceGrid } = view;
	const hand = handAt(path, places.apexM, corner.direction);
	const padding: typeof PADDING = hand < 0 ? PADDING : [PADDING[0], PADDING[3], PADDING[2], PADDING[1]];
	const lines = stretchLines(view, fromM, toM);
	const frame = cornerFrame({ lines, hand, ...SIZE, padding, mostPxPerM: 4.5 });
	const reference = planTrack(lines.reference, frame, fromM);
	const driver = planTrack(lines.driver, frame, fromM);
	const pencil = new PlanPencil(view, frame, hand, [...reference.points, ...driver.points]);
	pencil.crossing(places.turnInM, 'turn-in', window);
	pencil.crossing(places.endM, 'corner end', window);
	pencil.apexWedge(places.apexM, window);
	const verb = places.driver?.onsetM != null ? 'brakes at' : 'lifts at';
	pencil.onset(places.driver?.onsetM ?? places.driver?.liftM ?? null, verb, 'driver', driver.points, window);
	pencil.onset(
		places.reference?.onsetM ?? places.reference?.liftM ?? null,
		'reference at',
		'reference',
		reference.points,
		window
	);
	pencil.metres(rulerTicks({ fromM, toM, lengthM: path.lengthM, closed: path.closed }));
	return {
		widthPx: frame.widthPx,
		heightPx: frame.heightPx,
		reference: planRibbon(reference, referenceGrid, RIBBON.highlighter, toM),
		driver: planRibbon(driver, driverGrid, RIBBON.pen, toM),
		ticks: pencil.ticks.toString(),
		crossings: pencil.crossings.toString(),
		apex: pencil.apex.toString(),
		leaders: pencil.leaders.toString(),
		labels: pencil.labels,
		scale: scaleBar(frame, hand),
		track: { fromM, stepM: driver.stepM, driver: steps(driver.points), reference: steps(reference.points) },
		note:
			driverGrid.offsetM === null && referenceGrid.offsetM === null
				? 'No positions in these files: both lines lie on the layout’s path'
				: null
	};
}

/** Draws beside the lines and remembers what is taken, so that labels keep clear of each other. */
class PlanPencil {
	readonly ticks = new CompactPath();
	readonly crossings = new CompactPath();
	readonly apex = new CompactPath();
	readonly leaders = new CompactPath();
	readonly labels: PlanLabel[] = [];
	readonly #boxes: Box[] = [];
	readonly #points: [number, number][];
	readonly #frame: PlanFrame;
	readonly #view: ComparisonView;
	readonly #hand: 1 | -1;
	/** px from the path that clears both lines */
	readonly #clearPx: number;

	constructor(view: ComparisonView, frame: PlanFrame, hand: 1 | -1, points: [number, number][]) {
		this.#view = view;
		this.#frame = frame;
		this.#hand = hand;
		this.#points = points.filter(([x, y]) => Number.isFinite(x) && Number.isFinite(y));
		this.#clearPx = Math.min(34, 12 + 4 * frame.pxPerM);
		const scale = scaleBar(frame, hand);
		this.#boxes.push({ x: scale.x - 6, y: scale.y - 24, width: scale.lengthPx + 12, height: 34 });
	}

	/** A point beside the path: +1 left, −1 right of it, px away; and the direction there. */
	#beside(placeM: number, side: 1 | -1, awayPx: number): { at: [number, number]; out: [number, number] } {
		const point = pathPoint(this.#view.path, placeM);
		const [x, y] = this.#frame.place(point.x, point.y);
		const [ox, oy] = this.#frame.turn(point.normalX * side, point.normalY * side);
		return { at: [x + ox * awayPx, y + oy * awayPx], out: [ox, oy] };
	}

	#stroke(path: CompactPath, from: [number, number], to: [number, number]): void {
		path.moveTo(from[0] * UNITS_PER_PX, from[1] * UNITS_PER_PX);
		path.lineTo(to[0] * UNITS_PER_PX, to[1] * UNITS_PER_PX);
	}

	/** Writes a label at the best of some points; false where each would cover too much. */
	#write(
		text: string,
		kind: PlanLabel['kind'],
		spots: { at: [number, number]; out: [number, number] }[]
	): PlanLabel | null {
		const width = text.length * CHARACTER_PX + (kind === 'reference' ? 8 : 0);
		const candidates = spots.map(({ at, out }, order) => {
			const anchor: PlanLabel['anchor'] = out[0] > 0.6 ? 'start' : out[0] < -0.6 ? 'end' : 'middle';
			const x = anchor === 'start' ? at[0] : anchor === 'end' ? at[0] - width : at[0] - width / 2;
			const y = at[1] - LINE_PX / 2 + (anchor === 'middle' ? (out[1] * LINE_PX) / 2 : 0);
			return { x, y, width, height: LINE_PX, penalty: order * 0.4, anchor, hang: at, centreY: y + LINE_PX / 2 };
		});
		const frame = { x: 0, y: 0, width: this.#frame.widthPx, height: this.#frame.heightPx };
		const { chosen, cost } = placeLabel(candidates, { points: this.#points, boxes: this.#boxes, frame });
		if (cost > MOST_COVERED) return null;
		this.#boxes.push(chosen);
		const label: PlanLabel = {
			text,
			kind,
			x: Math.round(chosen.hang[0] * 10) / 10,
			y: Math.round(chosen.centreY * 10) / 10,
			anchor: chosen.anchor
		};
		this.labels.push(label);
		return label;
	}

	/** A dashed line across both cars' lines, named on the outside. */
	crossing(placeM: number, name: string, { fromM, toM }: CornerWindow): void {
		if (!(placeM > fromM) || !(placeM < toM)) return;
		const outside = -this.#hand as 1 | -1;
		this.#stroke(this.crossings, this.#beside(placeM, 1, this.#clearPx).at, this.#beside(placeM, -1, this.#clearPx).at);
		this.#write(name, 'name', [
			this.#beside(placeM, outside, this.#clearPx + 6),
			this.#beside(placeM, this.#hand, this.#clearPx + 6),
			this.#beside(placeM, outside, this.#clearPx + 22)
		]);
	}

	/** A wedge that points at the apex from the inside. */
	apexWedge(placeM: number, { fromM, toM }: CornerWindow): void {
		if (!(placeM > fromM) || !(placeM < toM)) return;
		const tip = this.#beside(placeM, this.#hand, Math.max(9, this.#clearPx - 12));
		const foot = this.#beside(placeM, this.#hand, Math.max(9, this.#clearPx - 12) + 10);
		const wide: [number, number] = [-tip.out[1] * 4.5, tip.out[0] * 4.5];
		this.#stroke(this.apex, tip.at, [foot.at[0] + wide[0], foot.at[1] + wide[1]]);
		this.apex.lineTo((foot.at[0] - wide[0]) * UNITS_PER_PX, (foot.at[1] - wide[1]) * UNITS_PER_PX);
		this.apex.closePath();
		this.#boxes.push({ x: foot.at[0] - 8, y: foot.at[1] - 8, width: 16, height: 16 });
		const away = Math.max(9, this.#clearPx - 12);
		this.#write(
			'apex',
			'name',
			[18, 26].map((px) => this.#beside(placeM, this.#hand, away + px))
		);
	}

	/** Where a braking (or a lift) begins: a leader from the line to a label, inside the turn where there is room. */
	onset(
		placeM: number | null,
		text: string,
		kind: 'driver' | 'reference',
		points: [number, number][],
		window: CornerWindow
	): void {
		if (placeM === null || !(placeM >= window.fromM) || !(placeM <= window.toM)) return;
		const at = points[Math.round((placeM - window.fromM) / 2)];
		if (!at || !Number.isFinite(at[0]) || !Number.isFinite(at[1])) return;
		// Leaders run level, so that the labels of near onsets form a list.
		const level = (side: 1 | -1): [number, number] => [this.#beside(placeM, side, 1).out[0] < 0 ? -1 : 1, 0];
		const spots = [this.#hand, -this.#hand as 1 | -1].flatMap((side) =>
			[0, -17, 17, -34, 34].map((shift) => {
				const out = level(side);
				return { at: [at[0] + out[0] * (this.#clearPx + 8), at[1] + shift] as [number, number], out };
			})
		);
		const label = this.#write(`${text} ${formatDistance(this.#onLap(placeM))}`, kind, spots);
		if (!label) return;
		const side = label.anchor === 'end' ? 3 : -3;
		this.#stroke(this.leaders, at, [label.x + side, label.y]);
	}

	/** Ticks every 10 m and numbers every 50, on the outside; a number that would cover something is left out. */
	metres(ticks: RulerTick[]): void {
		const outside = -this.#hand as 1 | -1;
		for (const { atM, onLapM, size } of ticks.filter((tick) => tick.size > 1)) {
			const near = this.#beside(atM, outside, this.#clearPx);
			this.#stroke(this.ticks, near.at, this.#beside(atM, outside, this.#clearPx + (size === 3 ? 8 : 4.5)).at);
			if (size === 3) this.#write(formatNumber(onLapM), 'metre', [this.#beside(atM, outside, this.#clearPx + 12)]);
		}
	}

	#onLap(placeM: number): number {
		const { lengthM, closed } = this.#view.path;
		return closed ? ((placeM % lengthM) + lengthM) % lengthM : placeM;
	}
}

/** A round length that is a sensible piece of the drawing, at its foot on the inside of the turn. */
function scaleBar({ pxPerM, widthPx, heightPx }: PlanFrame, hand: 1 | -1): PlanView['scale'] {
	const lengthM = [5, 10, 20, 50, 100, 200].find((m) => m * pxPerM >= 42) ?? 500;
	const lengthPx = Math.round(lengthM * pxPerM * 10) / 10;
	return { x: hand < 0 ? widthPx - 12 - lengthPx : 12, y: heightPx - 8, lengthPx, text: formatDistance(lengthM) };
}

/** Points as first place and steps in tenths of a pixel: small numbers compress. A gap is null and starts anew after it. */
function steps(points: [number, number][]): (number | null)[] {
	const out: (number | null)[] = [];
	let last: [number, number] = [0, 0];
	for (const [x, y] of points) {
		if (!Number.isFinite(x) || !Number.isFinite(y)) {
			out.push(null, null);
			continue;
		}
		const now: [number, number] = [Math.round(x * UNITS_PER_PX), Math.round(y * UNITS_PER_PX)];
		out.push(now[0] - last[0], now[1] - last[1]);
		last = now;
	}
	return out;
}
