import { analyseRun, type RunAnalysis } from '../../analysis/analyseRun.ts';
import { prepareChannels } from '../../analysis/channels/prepareChannels.ts';
import type { Channels, LapGrid, ReferencePath } from '../../analysis/model.ts';
import { buildPath } from '../../analysis/path/buildPath.ts';
import type { RawRun } from '../../parse/rawRun.ts';
import { RunReader } from '../../parse/runReader.ts';
import { KerbnoteError } from '../../schemas/kerbnoteError.ts';
import type { UploadStage } from '../../schemas/views.ts';
import { TRACE_CHANNELS, TRACE_CHANNEL_NAMES } from '../db/traceChannels.ts';
import { encodeTrace } from '../db/traceCodec.ts';
import type {
	AnalysedLap,
	AnalysedRun,
	ImportRequest,
	KnownBrake,
	LayoutCandidate,
	LayoutFingerprint
} from './importMessages.ts';
import { matchesLayout } from './matchLayout.ts';
import { speedStrip } from './speedStrip.ts';

export interface AnalyseFileOptions extends Pick<ImportRequest, 'fileName' | 'mapping' | 'sizeBytes'> {
	/** how far the import is, 0–1 */
	progress(stage: UploadStage, share: number, rowsRead: number): void;
	/** what is known of the brake of the car that the file's preamble names; null: nothing */
	brake(metadata: Record<string, string>): Promise<KnownBrake | null>;
	/** stored layouts that a run may have been driven on */
	candidates(fingerprint: LayoutFingerprint, runIndex: number): Promise<LayoutCandidate[]>;
}

/** A layout that a run may have been driven on: a stored one, or that of an earlier run of the same file. */
interface Place extends Pick<LayoutCandidate, 'path' | 'corners' | 'cells' | 'chosen'> {
	layout: AnalysedRun['layout'];
}

/** Shares of the whole import, as it takes its time: reading most, then the analysis. */
const READING_SHARE = 0.5;
const ANALYSIS_SHARE = 0.4;

/**
 * From the bytes of a file to runs that are ready to be stored. No database, no clock.
 *
 * @param bytes the file in chunks, gzip taken off
 * @returns every run of the file, in order
 * @throws {KerbnoteError} where the file is refused
 */
export async function analyseFile(
	bytes: AsyncIterable<Uint8Array>,
	options: AnalyseFileOptions
): Promise<AnalysedRun[]> {
	options.progress('reading', 0, 0);
	const { raws, rows } = await readRuns(bytes, options);
	const analysed: AnalysedRun[] = [];
	const found: Place[] = [];
	for (const [i, raw] of raws.entries()) {
		const done = READING_SHARE + (ANALYSIS_SHARE * i) / raws.length;
		options.progress('laps', done, rows);
		const { analysis, layout } = await analyseOnLayout(raw, i + 1, found, options);
		const { corners, cells } = analysis.document;
		if ('path' in layout) found.push({ path: layout.path, corners, cells, layout: { sameAs: i } });
		options.progress('corners', done + ANALYSIS_SHARE / 2 / raws.length, rows);
		analysed.push(readyToStore(raw, analysis, layout));
	}
	options.progress('storing', READING_SHARE + ANALYSIS_SHARE, rows);
	return analysed;
}

async function readRuns(
	bytes: AsyncIterable<Uint8Array>,
	options: AnalyseFileOptions
): Promise<{ raws: RawRun[]; rows: number }> {
	const reader = new RunReader({ fileName: options.fileName, mapping: options.mapping ?? undefined });
	let readBytes = 0;
	for await (const chunk of bytes) {
		reader.push(chunk);
		readBytes += chunk.length;
		// A compressed file is longer than its size says; the share then only stays where it is.
		const share = Math.min(1, readBytes / Math.max(1, options.sizeBytes));
		options.progress('reading', READING_SHARE * share, reader.rows);
	}
	const raws = reader.end();
	return { raws, rows: reader.rows };
}

/** On the known layout that the run was driven on, else on a path of its own. */
async function analyseOnLayout(
	raw: RawRun,
	runIndex: number,
	found: readonly Place[],
	options: AnalyseFileOptions
): Promise<{ analysis: RunAnalysis; layout: AnalysedRun['layout'] }> {
	const brake = await options.brake(raw.source.metadata);
	const brakeFull = brake?.unit === raw.brakeUnit ? brake.full : null;
	const { path } = buildPath(prepareChannels(raw, { brakeFull }));
	const known = await options.candidates(fingerprintOf(path), runIndex);
	for (const place of [...known.map(placeOf), ...found]) {
		if (!place.chosen && !matchesLayout(path, place.path)) continue;
		try {
			const analysis = analyseRun([raw], { layout: place, brakeFull });
			return { analysis, layout: place.layout };
		} catch (error) {
			// It looked like this layout and is not; another may be it.
			if (!(error instanceof KerbnoteError && error.code === 'reference_mismatch')) throw error;
		}
	}
	const analysis = analyseRun([raw], { brakeFull });
	return { analysis, layout: { path: analysis.path } };
}

function placeOf({ layoutId, pathVersion, mapVersion, ...place }: LayoutCandidate): Place {
	return { ...place, layout: { known: { layoutId, pathVersion, mapVersion } } };
}

/** What a path says of its circuit, to look for candidates by. */
export function fingerprintOf(path: ReferencePath): LayoutFingerprint {
	return {
		lengthM: path.closed ? path.lengthM : null,
		centre: path.origin === 'positions' ? path.frame : null,
		origin: path.origin
	};
}

function readyToStore(raw: RawRun, analysis: RunAnalysis, layout: AnalysedRun['layout']): AnalysedRun {
	const { channels } = analysis.placed;
	const { source, laps, corners, cells, metrics, lockUps, theoreticalBestS, schema } = analysis.document;
	const grids = new Map(analysis.grids.map((grid) => [grid.lapNumber, grid]));
	return {
		document: { schema, source, laps, corners, cells, metrics, lockUps, theoreticalBestS },
		layout,
		laps: laps.map(({ number }) => ({ number, grid: storedGrid(grids.get(number)) })),
		fullThrottle: analysis.fullThrottle,
		brake: { unit: channels.brakeUnit, full: channels.brakeFull, scaleAssumed: channels.brakeScaleAssumed },
		channels: carriedChannels(channels),
		speedStrip: speedStrip(channels.timeS, channels.speedKmh),
		startedAtMs: raw.startedAtMs
	};
}

function storedGrid(grid: LapGrid | undefined): AnalysedLap['grid'] {
	if (!grid) return null;
	const columns = TRACE_CHANNEL_NAMES.flatMap((channel) => {
		const values = grid[channel];
		return values ? [{ channel, ...encodeTrace(values, TRACE_CHANNELS[channel].perUnit) }] : [];
	});
	return { lengthM: grid.lengthM, marginM: grid.marginM, columns };
}

const CARRIED = [
	'brakePct',
	'throttlePct',
	'steeringDeg',
	'gear',
	'engineSpeedRpm',
	'xM',
	'accLongMps2',
	'accLatMps2',
	'yawRateRadps',
	'wheelKmh'
] as const satisfies (keyof Channels)[];

/** Names without units: what pages say a run has or lacks. */
function carriedChannels(channels: Channels): string[] {
	const names: Record<(typeof CARRIED)[number], string> = {
		brakePct: 'brake',
		throttlePct: 'throttle',
		steeringDeg: 'steering',
		gear: 'gear',
		engineSpeedRpm: 'engineSpeed',
		xM: 'position',
		accLongMps2: 'accLong',
		accLatMps2: 'accLat',
		yawRateRadps: 'yawRate',
		wheelKmh: 'wheelSpeeds'
	};
	return ['speed', ...CARRIED.filter((channel) => channels[channel] !== null).map((channel) => names[channel])];
}
