import type {
	AnalysisDocument,
	Cell,
	Comparison,
	Corner,
	CornerMetrics,
	Warning
} from '../schemas/analysisDocument.ts';
import type { WarningCode } from '../schemas/codes.ts';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import type { RawRun } from '../parse/rawRun.ts';
import { fadeWatch } from './car/fadeWatch.ts';
import { fitFullThrottle, type FullThrottleModel } from './car/fullThrottle.ts';
import { prepareChannels } from './channels/prepareChannels.ts';
import { cellTimes, theoreticalBest } from './compare/cellTimes.ts';
import { chooseLap, type ChosenLap } from './compare/chooseLap.ts';
import { compareLaps } from './compare/compareLaps.ts';
import { LEAST_PEDAL_LAG_S, pedalLag, shiftPedals, widenByLag } from './compare/pedalLag.ts';
import { cornerSpread, ownBest } from './compare/ownBest.ts';
import { rollingLap } from './compare/rollingLap.ts';
import { usualOnsets } from './compare/usualOnsets.ts';
import { cutCells } from './corners/cutCells.ts';
import { findCorners } from './corners/findCorners.ts';
import { gridLap } from './laps/gridLap.ts';
import { measureRun } from './metrics/measureRun.ts';
import type { Channels, Lap, LapGrid, PlacedRun, ReferencePath } from './model.ts';
import { buildPath } from './path/buildPath.ts';
import type { LineSegment } from './path/lineSegment.ts';
import { placeRun } from './path/placeRun.ts';
import { toDocument } from './toDocument.ts';

/** A layout as stored: what a run is laid on instead of a path of its own. */
export interface KnownLayout {
	path: ReferencePath;
	corners: Corner[];
	cells: Cell[];
}

export interface AnalyseOptions {
	/** which run of the file, from 1 */
	run?: number;
	/** lap to compare, by its number */
	lap?: number;
	/** lap to compare with: of the reference where there is one, else of the same run */
	referenceLap?: number;
	/** the start/finish line, where the file has no lap mark */
	line?: LineSegment;
	/** runs of the reference's file; path, corners and cells come from it */
	reference?: RawRun[];
	/** known layout; path, corners and cells come from it */
	layout?: KnownLayout;
	/** full pressure of the car in the brake channel's unit, where a person has set it */
	brakeFull?: number | null;
	/** which laps are laid on the grid: every timed one, or only the two compared */
	grids?: 'timed' | 'compared';
}

export interface RunAnalysis {
	document: AnalysisDocument;
	placed: PlacedRun;
	/** in the order of laps */
	grids: LapGrid[];
	path: ReferencePath;
	corners: Corner[];
	cells: Cell[];
	fullThrottle: FullThrottleModel | null;
}

/** What a reference's run says of the path, which holds for every run laid on it. */
const OF_THE_PATH: ReadonlySet<WarningCode> = new Set(['line_chosen', 'path_from_accelerations', 'speed_only']);

/** A run laid on a path and measured. */
interface Measured {
	placed: PlacedRun;
	metrics: CornerMetrics[];
	lockUps: AnalysisDocument['lockUps'];
	warnings: Warning[];
}

/**
 * From raw runs to the whole analysis: channels, path, laps, corners, cells, metrics and, where two laps are asked for, their comparison.
 *
 * The path, its corners and cells come from the layout where one is given, else from the reference's run, else from the run itself.
 *
 * @param raws runs of one file, at least one
 * @throws {KerbnoteError} `no_such_run`, `no_such_lap`, `reference_mismatch`, and what the stages refuse
 */
export function analyseRun(raws: RawRun[], options: AnalyseOptions = {}): RunAnalysis {
	const raw = chooseRun(raws, options.run);
	const warnings: Warning[] = [];
	if (raws.length > 1 && options.run === undefined)
		warnings.push({
			code: 'more_runs',
			message: `the file holds ${raws.length} runs; this is the first`,
			row: null
		});
	const { channels, referenceChannels } = prepareBoth(raw, options);

	const { layout } = options;
	const own = referenceChannels ?? channels;
	const laid = layout ? { path: layout.path, ...placeRun(own, layout.path) } : buildPath(own, { line: options.line });
	const { path } = laid;
	const corners = layout?.corners ?? findCorners(laid.placed);
	const ownMeasured = measure(laid, corners);
	const reference = referenceChannels ? ownMeasured : null;
	const asRecorded = reference ? measure(placeRun(channels, path), corners) : ownMeasured;
	if (reference) warnings.push(...reference.warnings.filter(({ code }) => OF_THE_PATH.has(code)));
	const cells = layout?.cells ?? cellsOf(ownMeasured, corners, path.lengthM);
	const fullThrottle = fitFullThrottle(channels);

	const { laps } = asRecorded.placed;
	const chosen = chooseBoth(laps, reference?.placed.laps ?? null, options, warnings);
	const measured = chosen && reference ? onOneClock(asRecorded, reference, chosen, corners, warnings) : asRecorded;
	const comparison = chosen && compareChosen(chosen, measured, reference ?? measured, corners, fullThrottle);
	const cellS = laps.map((lap) => cellTimes(measured.placed, lap, cells));
	const cleanCellS = cellS.filter((_, i) => laps[i].clean);
	const document = toDocument({
		source: raw.source,
		warnings: [...channels.warnings, ...measured.warnings, ...warnings],
		path: layout ? { ...path, line: 'layout' } : path,
		laps,
		cellS,
		corners,
		cells,
		metrics: measured.metrics,
		lockUps: measured.lockUps,
		theoreticalBestS: theoreticalBest(cleanCellS, cells.length),
		rollingBest: rollingLap(measured.placed),
		fade: fadeWatch(channels),
		ownBest: ownBest(cells, cellS, laps),
		spreads: cornerSpread(corners, measured.metrics, cleanLaps(laps), path.lengthM),
		comparison
	});
	const gridded =
		options.grids === 'compared'
			? laps.filter((lap) => lap === chosen?.driver.lap)
			: laps.filter((lap) => lap.kind === 'timed' && lap.turn !== null);
	const grids = gridded.map((lap) => gridLap(measured.placed, lap));
	return { document, placed: measured.placed, grids, path, corners, cells, fullThrottle };
}

function chooseRun(raws: RawRun[], wanted = 1): RawRun {
	const raw = raws[wanted - 1];
	if (raw) return raw;
	throw new KerbnoteError(
		'no_such_run',
		`analyse requires a run of the file, got run ${wanted} of ${raws.length}`,
		`Choose a run from 1 to ${raws.length}.`
	);
}

/** Channels of both runs; where both guess what full brake pressure is, the larger value serves both. */
function prepareBoth(raw: RawRun, options: AnalyseOptions): { channels: Channels; referenceChannels: Channels | null } {
	const { brakeFull } = options;
	const prepare = (run: RawRun, full: number | null | undefined) => prepareChannels(run, { brakeFull: full });
	const channels = prepare(raw, brakeFull);
	if (!options.reference) return { channels, referenceChannels: null };
	const referenceRaw = chooseRun(options.reference);
	const referenceChannels = prepare(referenceRaw, brakeFull);
	const guessed = channels.brakeScaleAssumed && referenceChannels.brakeScaleAssumed;
	if (!guessed || channels.brakeUnit !== referenceChannels.brakeUnit) return { channels, referenceChannels };
	const full = Math.max(channels.brakeFull ?? 0, referenceChannels.brakeFull ?? 0);
	const shared = (run: RawRun, own: Channels): Channels => {
		if (own.brakeFull === full) return own;
		const { warnings, brakeScaleAssumed } = own;
		return { ...prepare(run, full), warnings, brakeScaleAssumed };
	};
	return { channels: shared(raw, channels), referenceChannels: shared(referenceRaw, referenceChannels) };
}

function measure({ placed, warnings }: { placed: PlacedRun; warnings: Warning[] }, corners: Corner[]): Measured {
	return { placed, warnings, ...measureRun(placed, corners) };
}

/**
 * Two devices run on two clocks: what hands and feet do in the driver's run is moved by the lag that the comparison's two laps show, and
 * measured again.
 */
function onOneClock(
	driver: Measured,
	reference: Measured,
	chosen: { driver: ChosenLap; reference: ChosenLap },
	corners: Corner[],
	warnings: Warning[]
): Measured {
	const lagS = pedalLag(gridLap(driver.placed, chosen.driver.lap), gridLap(reference.placed, chosen.reference.lap));
	if (Math.abs(lagS) < LEAST_PEDAL_LAG_S) return driver;
	warnings.push({
		code: 'channel_lag',
		message: `pedals and steering come ${Math.abs(lagS).toFixed(2)} s ${lagS > 0 ? 'later' : 'earlier'} than in the reference against the car’s motion; they were moved by it`,
		row: null
	});
	const placed = { ...driver.placed, channels: shiftPedals(driver.placed.channels, lagS) };
	const { metrics, lockUps } = measureRun(placed, corners);
	return { ...driver, placed, metrics: widenByLag(metrics, LAG_LEFT_S), lockUps };
}

/** ± of a lag that was taken out. */
const LAG_LEFT_S = 0.02;

const cleanLaps = (laps: readonly Lap[]): number[] => laps.filter((lap) => lap.clean).map((lap) => lap.number);

function cellsOf({ placed, metrics }: Measured, corners: Corner[], lengthM: number): Cell[] {
	const clean = cleanLaps(placed.laps);
	const counted = clean.length ? clean : placed.laps.map((lap) => lap.number);
	return cutCells(corners, lengthM, usualOnsets(metrics, corners, counted, lengthM));
}

/** The two laps that are compared, or null where none was asked for or a run holds no timed lap. */
function chooseBoth(
	laps: readonly Lap[],
	referenceLaps: readonly Lap[] | null,
	options: AnalyseOptions,
	warnings: Warning[]
): { driver: ChosenLap; reference: ChosenLap } | null {
	const asked = referenceLaps !== null || options.referenceLap !== undefined;
	const driver = chooseLap(laps, options.lap, 'the comparison');
	if (!asked) return null;
	const reference = chooseLap(referenceLaps ?? laps, options.referenceLap, 'the reference');
	if (!driver || !reference) return null;
	if (referenceLaps && reference.noneClean)
		warnings.push({
			code: 'no_clean_lap',
			message: 'the reference holds no clean lap; its fastest timed one stands in',
			row: null
		});
	return { driver, reference };
}

function compareChosen(
	chosen: { driver: ChosenLap; reference: ChosenLap },
	driver: Measured,
	reference: Measured,
	corners: Corner[],
	fullThrottle: FullThrottleModel | null
): Comparison {
	const side = (measured: Measured, { lap }: ChosenLap) => ({
		grid: gridLap(measured.placed, lap),
		metrics: measured.metrics.filter((m) => m.lap === lap.number)
	});
	return compareLaps({
		driver: side(driver, chosen.driver),
		reference: side(reference, chosen.reference),
		corners,
		run: { metrics: driver.metrics, cleanLaps: cleanLaps(driver.placed.laps), fullThrottle }
	});
}
