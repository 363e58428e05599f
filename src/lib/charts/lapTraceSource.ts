import { decodeTraceFrame, type TraceFrame } from '$lib/analysis/trace/traceFrame';
import { speedIn } from '$lib/format/speed';
import type { CornerCard } from '$lib/view/cornerCard';
import type { RowKey } from '$lib/view/traceRows';
import type { CursorTraces, OtherLap, TraceSource } from './traceSource';

export interface LapPair {
	/** public ids of the laps */
	driver: string;
	reference: string;
	/** what each lap's brake column is multiplied by in this comparison */
	brakeScale: { driver: number; reference: number };
	/** further clean laps of the driver's run */
	others?: readonly { id: string; number: number }[];
}

type Drawn = Pick<CornerCard, 'window' | 'delta' | 'speedUnit'>;

const CHANNELS = 'timeS,speedKmh,brakePct,throttlePct,steeringDeg';
/** A further lap is only drawn: its time is never read. */
const OTHER_CHANNELS = 'speedKmh,brakePct,throttlePct,steeringDeg';

/**
 * The numbers under a card's cursor, fetched from the API: the card's stretch of both laps, a few kilobytes in all; the further
 * laps of the run when they are asked for.
 *
 * @param request `fetch`; another in tests
 */
export function lapTraceSource(pair: LapPair, card: Drawn, request: typeof fetch = fetch): TraceSource {
	const { fromM, toM } = card.window;
	const read = async (lap: string, channels: string, signal: AbortSignal): Promise<TraceFrame> => {
		const query = new URLSearchParams({ channels, encoding: 'packed', from: `${fromM}`, to: `${toM}` });
		const response = await request(`/api/v1/laps/${lap}/trace?${query}`, { signal });
		if (!response.ok) throw new Error(`the trace of a lap requires an answer of 200, got ${response.status}`);
		return decodeTraceFrame(await response.arrayBuffer());
	};
	const others = pair.others ?? [];
	return {
		load: async (signal) => {
			const [driver, reference] = await Promise.all([
				read(pair.driver, CHANNELS, signal),
				read(pair.reference, CHANNELS, signal)
			]);
			return pairTraces(driver, reference, pair.brakeScale, card);
		},
		others: {
			numbers: others.map(({ number }) => number),
			load: (signal) =>
				Promise.all(
					others.map(async ({ id, number }): Promise<OtherLap> => {
						const frame = await read(id, OTHER_CHANNELS, signal);
						return { number, columns: channelsOf(frame, pair.brakeScale.driver, card) };
					})
				)
		}
	};
}

function columnOf(
	frame: TraceFrame,
	channel: string,
	{ window }: Drawn,
	convert = (value: number) => value
): Float64Array | null {
	const values = frame.columns.get(channel)?.values;
	const first = window.fromM - frame.fromM;
	const length = window.toM - window.fromM + 1;
	return values ? Float64Array.from({ length }, (_, i) => convert(values[first + i] ?? NaN)) : null;
}

function channelsOf(frame: TraceFrame, brakeScale: number, card: Drawn): Record<RowKey, Float64Array | null> {
	return {
		brake: columnOf(frame, 'brakePct', card, (value) => value * brakeScale),
		speed: columnOf(frame, 'speedKmh', card, (value) => speedIn(value, card.speedUnit)),
		throttle: columnOf(frame, 'throttlePct', card),
		steering: columnOf(frame, 'steeringDeg', card)
	};
}

function pairTraces(
	driver: TraceFrame,
	reference: TraceFrame,
	brakeScale: LapPair['brakeScale'],
	card: Drawn
): CursorTraces {
	const { window, delta } = card;
	const unknown = (): Float64Array => new Float64Array(window.toM - window.fromM + 1).fill(NaN);
	const mine = columnOf(driver, 'timeS', card) ?? unknown();
	const theirs = columnOf(reference, 'timeS', card) ?? unknown();
	const apartS = mine.map((time, i) => time - theirs[i]);
	// Counted from the span's beginning, which rarely is a whole metre; before it there is nothing to count.
	const start = delta.fromM - window.fromM;
	const low = Math.floor(start);
	const zero = apartS[low] + ((apartS[low + 1] ?? apartS[low]) - apartS[low]) * (start - low);
	return {
		fromM: window.fromM,
		driver: channelsOf(driver, brakeScale.driver, card),
		reference: channelsOf(reference, brakeScale.reference, card),
		deltaS: apartS.map((value, i) => (i < start ? NaN : value - zero)),
		apartS
	};
}
