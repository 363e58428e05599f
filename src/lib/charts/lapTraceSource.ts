import { decodeTraceFrame, type TraceFrame } from '$lib/analysis/trace/traceFrame';
import { speedIn } from '$lib/format/speed';
import type { CornerCard } from '$lib/view/cornerCard';
import type { CursorTraces, TraceSource } from './traceSource';

export interface LapPair {
	/** public ids of the laps */
	driver: string;
	reference: string;
	/** what each lap's brake column is multiplied by in this comparison */
	brakeScale: { driver: number; reference: number };
}

const CHANNELS = 'timeS,speedKmh,brakePct,throttlePct,steeringDeg';

/**
 * The numbers under a card's cursor, fetched from the API: the card's stretch of both laps, a few kilobytes in all.
 *
 * @param request `fetch`; another in tests
 */
export function lapTraceSource(
	pair: LapPair,
	card: Pick<CornerCard, 'window' | 'delta' | 'speedUnit'>,
	request: typeof fetch = fetch
): TraceSource {
	const { fromM, toM } = card.window;
	const read = async (lap: string, signal: AbortSignal): Promise<TraceFrame> => {
		const query = new URLSearchParams({ channels: CHANNELS, encoding: 'packed', from: `${fromM}`, to: `${toM}` });
		const response = await request(`/api/v1/laps/${lap}/trace?${query}`, { signal });
		if (!response.ok) throw new Error(`the trace of a lap requires an answer of 200, got ${response.status}`);
		return decodeTraceFrame(await response.arrayBuffer());
	};
	return {
		load: async (signal) => {
			const [driver, reference] = await Promise.all([read(pair.driver, signal), read(pair.reference, signal)]);
			return pairTraces(driver, reference, pair.brakeScale, card);
		}
	};
}

function pairTraces(
	driver: TraceFrame,
	reference: TraceFrame,
	brakeScale: LapPair['brakeScale'],
	{ window, delta, speedUnit }: Pick<CornerCard, 'window' | 'delta' | 'speedUnit'>
): CursorTraces {
	const length = window.toM - window.fromM + 1;
	const column = (frame: TraceFrame, channel: string, convert = (value: number) => value): Float64Array | null => {
		const values = frame.columns.get(channel)?.values;
		const first = window.fromM - frame.fromM;
		return values ? Float64Array.from({ length }, (_, i) => convert(values[first + i] ?? NaN)) : null;
	};
	const side = (frame: TraceFrame, scale: number): CursorTraces['driver'] => ({
		brake: column(frame, 'brakePct', (value) => value * scale),
		speed: column(frame, 'speedKmh', (value) => speedIn(value, speedUnit)),
		throttle: column(frame, 'throttlePct'),
		steering: column(frame, 'steeringDeg')
	});
	const mine = column(driver, 'timeS') ?? new Float64Array(length).fill(NaN);
	const theirs = column(reference, 'timeS') ?? new Float64Array(length).fill(NaN);
	const apart = mine.map((time, i) => time - theirs[i]);
	// Counted from the span's beginning, which rarely is a whole metre; before it there is nothing to count.
	const start = delta.fromM - window.fromM;
	const low = Math.floor(start);
	const zero = apart[low] + ((apart[low + 1] ?? apart[low]) - apart[low]) * (start - low);
	return {
		fromM: window.fromM,
		driver: side(driver, brakeScale.driver),
		reference: side(reference, brakeScale.reference),
		deltaS: apart.map((value, i) => (i < start ? NaN : value - zero))
	};
}
