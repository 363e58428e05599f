import { UNITS_PER_PX, WIDTH_UNITS } from './geometry/units.ts';
import { scaleLinear } from 'd3-scale';
import { CompactPath } from './geometry/CompactPath.ts';
import { formatDistance } from '../format/distance.ts';
import { formatNumber } from '../format/number.ts';

/** The ruler under the rows, in m on the path. */
export interface RulerView {
	/** path data of the ticks in tenths of a pixel, WIDTH_UNITS wide, hanging from 0: every 5 m, longer at 10 and at numbers */
	ticks: string;
	/** round places of the lap; the last one carries the unit */
	labels: { atM: number; text: string }[];
	/** named places, on a second line */
	marks: RulerMark[];
}

/** A tick: its unwrapped place, its place on the lap, and how strong it is: in a corner 1 every 5 m, 2 every 10, 3 where a number stands. */
export interface RulerTick {
	atM: number;
	onLapM: number;
	size: 1 | 2 | 3;
}

/** Numbers stand every 50 m; a short window, as in a kart, needs them closer, and a whole lap further apart. m each. */
const STEPS = [
	{ fromWindowM: 2500, numbered: 500, middle: 100, least: 50 },
	{ fromWindowM: 1000, numbered: 200, middle: 100, least: 20 },
	{ fromWindowM: 450, numbered: 100, middle: 50, least: 10 },
	{ fromWindowM: 130, numbered: 50, middle: 10, least: 5 },
	{ fromWindowM: 60, numbered: 20, middle: 10, least: 5 },
	{ fromWindowM: 0, numbered: 10, middle: 10, least: 5 }
];

const TICK_PX = { 1: 3.5, 2: 6, 3: 9 };

/**
 * Ticks within a window, every 5 m in a corner, counted from each crossing of the line, so that the numbers stay round where a corner spans it.
 */
export function rulerTicks({ fromM, toM, lengthM, closed }: RulerSpan): RulerTick[] {
	const ticks: RulerTick[] = [];
	const { numbered, middle, least } =
		STEPS.find(({ fromWindowM }) => toM - fromM >= fromWindowM) ?? STEPS[STEPS.length - 1];
	const turns = closed ? [Math.floor(fromM / lengthM), Math.floor(toM / lengthM)] : [0, 0];
	for (let turn = turns[0]; turn <= turns[1]; turn++) {
		const origin = turn * lengthM;
		const last = closed ? lengthM - 2 : Infinity;
		for (
			let onLapM = Math.max(0, Math.ceil((fromM - origin) / least) * least);
			origin + onLapM <= toM && onLapM <= last;
			onLapM += least
		) {
			const size = onLapM % numbered === 0 ? 3 : onLapM % middle === 0 ? 2 : 1;
			ticks.push({ atM: origin + onLapM, onLapM, size });
		}
	}
	return ticks;
}

export interface RulerMark {
	atM: number;
	name: string;
	/** does the name have room on a plot as wide as at a desk, and on a phone's */
	roomWide: boolean;
	roomNarrow: boolean;
}

export interface RulerSpan {
	fromM: number;
	toM: number;
	lengthM: number;
	closed: boolean;
}

export interface RulerInput extends RulerSpan {
	/** in the order in which names are kept when they come too near: the first stays longest */
	marks: { atM: number | null; name: string }[];
}

/** Plot widths for which names are judged, px. */
export const WIDE_PLOT_PX = 640;
export const NARROW_PLOT_PX = 330;
/** Names nearer than this give way. */
const NAME_ROOM_PX = 44;

/** Ticks, numbers and named places of a window. Numbers too near the window's ends are left out. */
export function rulerView(input: RulerInput): RulerView {
	const { fromM, toM, lengthM, closed, marks } = input;
	const ticks = rulerTicks(input);
	const x = scaleLinear([fromM, toM], [0, WIDTH_UNITS]);
	const path = new CompactPath();
	for (const { atM, size } of ticks) {
		path.moveTo(x(atM), 0);
		path.lineTo(x(atM), TICK_PX[size] * UNITS_PER_PX);
	}
	const numbered = ticks.filter((tick) => tick.size === 3);
	const labels = numbered.map(({ atM, onLapM }, i) => ({
		atM,
		text: i === numbered.length - 1 ? formatDistance(onLapM) : formatNumber(onLapM)
	}));
	const named = [...marks];
	for (let turn = Math.ceil(fromM / lengthM); closed && turn * lengthM < toM; turn++) {
		if (turn * lengthM > fromM) named.push({ atM: turn * lengthM, name: 'start/finish' });
	}
	const inside = named.filter(
		(m): m is { atM: number; name: string } => m.atM !== null && m.atM >= fromM && m.atM <= toM
	);
	const room = (plotPx: number): Set<string> => {
		const kept: { atM: number; name: string }[] = [];
		for (const mark of inside) {
			const near = kept.some((other) => (Math.abs(other.atM - mark.atM) / (toM - fromM)) * plotPx < NAME_ROOM_PX);
			if (!near) kept.push(mark);
		}
		return new Set(kept.map((mark) => mark.name));
	};
	const wide = room(WIDE_PLOT_PX);
	const narrow = room(NARROW_PLOT_PX);
	return {
		ticks: path.toString(),
		labels,
		marks: inside
			.map(({ atM, name }) => ({ atM, name, roomWide: wide.has(name), roomNarrow: narrow.has(name) }))
			.sort((a, b) => a.atM - b.atM)
	};
}
