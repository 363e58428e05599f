import { createHash } from 'node:crypto';
import { encodeTraceFrame, type ColumnInput } from '../../analysis/trace/traceFrame.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listFoundLaps, listTraces, seenLaps, type FoundLap } from '../db/lapRepository.ts';
import { decodePublicId } from '../db/publicId.ts';
import { TRACE_CHANNEL_NAMES, TRACE_CHANNELS, type TraceChannel } from '../db/traceChannels.ts';
import { decodeTrace } from '../db/traceCodec.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';
import { US_PER_S } from '../../units.ts';

export interface TraceQuery {
	channels?: readonly string[];
	encoding: 'float' | 'packed';
	from?: number;
	to?: number;
}

/** A lap's traces before they are read: the tag first, so that a browser that holds them costs no column. */
export interface TraceAnswer {
	etag: string;
	frame(): Promise<Uint8Array<ArrayBuffer>>;
}

/**
 * Columns of one lap on the path's 1 m grid, as a frame (see `traceFrame`).
 *
 * @throws 404 when there is no such lap, it was not laid on the grid, or the viewer may not see it
 */
export async function loadTrace(viewer: Viewer, lapId: string, query: TraceQuery): Promise<TraceAnswer> {
	const db = database();
	const channels = knownChannels(query.channels);
	const key = decodePublicId(lapId) ?? notFound();
	const [lap] = await listFoundLaps(seenLaps(db, viewer).where('laps.public_id', key));
	if (!lap || lap.grid_length_m === null || lap.grid_margin_m === null) notFound();
	const { grid_length_m: lengthM, grid_margin_m: marginM } = lap;
	return {
		etag: etagOf(lap, channels, query),
		frame: async () => {
			const stored = (await listTraces(db, [lap.lap_id], channels)).get(lap.lap_id);
			const fromM = Math.max(-marginM, query.from ?? -marginM);
			const first = fromM + marginM;
			const last = query.to === undefined ? undefined : query.to + marginM + 1;
			const columns = channels.flatMap((channel): ColumnInput[] => {
				const column = stored?.get(channel);
				if (!column) return [];
				const values = decodeTrace(column, (length) => new Float64Array(length)).subarray(first, last);
				return [{ channel, unit: TRACE_CHANNELS[channel].unit, perUnit: column.scale, values }];
			});
			return encodeTraceFrame(
				{ lap: lapId, lengthM, fromM, lapTimeS: lap.time_us / US_PER_S },
				columns,
				query.encoding === 'packed'
			);
		}
	};
}

function knownChannels(asked: readonly string[] | undefined): TraceChannel[] {
	if (!asked) return [...TRACE_CHANNEL_NAMES];
	return asked.map((name) => {
		const channel = TRACE_CHANNEL_NAMES.find((known) => known === name);
		if (channel) return channel;
		throw new RequestProblem(
			400,
			'invalid_input',
			`the request requires channels among ${TRACE_CHANNEL_NAMES.join(', ')}`,
			{
				issues: { channels: [`there is no channel ${name.slice(0, 40)}`] }
			}
		);
	});
}

function etagOf(lap: FoundLap, channels: readonly string[], { encoding, from, to }: TraceQuery): string {
	const content = JSON.stringify([lap.lap_id, lap.analysis_id, channels, encoding, from, to]);
	return `"${createHash('sha256').update(content).digest('base64url').slice(0, 27)}"`;
}
