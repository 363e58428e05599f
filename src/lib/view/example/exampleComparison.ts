import type { LapGrid, ReferencePath } from '../../analysis/model.ts';
import { centreLine, type CentreLine } from '../../demo/centreLine.ts';
import { VALLMERE_GRAND_PRIX } from '../../demo/circuits.ts';
import { drivenLine } from '../../demo/drivenLine.ts';
import type { CornerMetrics, Finding, LedgerRow } from '../../schemas/analysisDocument.ts';
import type { ComparisonView, CornerView, LapHead } from '../../schemas/views.ts';
import { exampleLap, REFERENCE_STYLE, type CornerStyle, type ExampleLap } from './exampleLap.ts';

export interface ExampleOptions {
	/** the circuit seen in a mirror, so that every right-hander is a left-hander */
	mirrored?: boolean;
	/** moves the start/finish line on by this many metres, so that a corner can span it */
	lineAtM?: number;
	/** channels that the file does not have */
	without?: ('brake' | 'throttle' | 'steering' | 'positions')[];
	/** a drop-out of the driver's recording, from and to in m */
	gap?: [number, number];
	/** driver and reference are the same lap */
	sameLap?: boolean;
	/** the driver is the quicker one */
	quicker?: boolean;
}

const MIRA_STYLES: Record<string, Partial<CornerStyle>> = {
	Fernside: { minShare: 0.985 },
	Sallow: { minShare: 0.99, pickUpLaterM: 1 },
	'Tern Hairpin': { earlyM: 12, overPedal: 1.35, minShare: 0.955 },
	Weir: { minShare: 1.02, overPedal: 0.8 },
	'Long Meadow': { earlyM: 7, minShare: 0.97 },
	Orchard: { minShare: 1.02 },
	'Lime Kiln': { pickUpLaterM: 14, earlyM: 3 },
	'Old Barn': { earlyM: 9, minShare: 0.985 },
	Millrace: { minShare: 0.965, pickUpLaterM: 7 },
	Heron: { earlyM: -3, minShare: 1.015 },
	Gatehouse: { overPedal: 1.22, minShare: 0.985, pickUpLaterM: 6 }
};

/**
 * A whole comparison without a file, a database or noise: two laps of the invented circuit, made by closed forms, with a ledger
 * that sums to the gap by construction. For the gallery and for tests of what is drawn; deterministic.
 */
export function exampleComparison(options: ExampleOptions = {}): ComparisonView {
	const vertices = VALLMERE_GRAND_PRIX.vertices.map((vertex) =>
		options.mirrored ? { ...vertex, yM: -vertex.yM } : vertex
	);
	const road = moveLine(centreLine({ ...VALLMERE_GRAND_PRIX, vertices }), options.lineAtM ?? 0);
	const wanderM = road.corners.map(() => 0);
	const referenceLine = drivenLine(road, { widthM: 3.8, apexAt: 0.6, wanderM });
	const driverLine = drivenLine(road, { widthM: 3.3, apexAt: 0.46, wanderM });
	const styles = road.corners.map((corner) => ({ ...REFERENCE_STYLE, ...MIRA_STYLES[corner.name] }));
	const plain = road.corners.map(() => REFERENCE_STYLE);
	const reference = strip(exampleLap(road, referenceLine, 3, options.quicker ? styles : plain), options, false);
	const driver = options.sameLap
		? reference
		: strip(exampleLap(road, driverLine, 6, options.quicker ? plain : styles), options, true);

	const corners: CornerView[] = road.corners.map((corner, i) => ({
		id: null,
		name: corner.name,
		number: i + 1,
		startM: onLap(corner.startM, road.lengthM),
		apexM: onLap(corner.apexM, road.lengthM),
		apex2M: null,
		endM: onLap(corner.endM, road.lengthM),
		direction: corner.sign > 0 ? 'left' : 'right',
		minRadiusM: corner.radiusM,
		angleDeg: Math.round((corner.endM - corner.startM) / corner.radiusM / (Math.PI / 180)),
		linkedTo: corner.name === 'Fernside' || corner.name === 'Sallow' ? i + 2 : null,
		kind: 'braked'
	}));
	const size = road.lengthM + 1;
	const delta = Array.from({ length: size }, (_, s) => timeAt(driver.grid, s) - timeAt(reference.grid, s));
	const ledger = makeLedger(road, driver, reference, delta);
	const findings = makeFindings(driver.metrics, reference.metrics, ledger);
	const path: ReferencePath = {
		lengthM: road.lengthM,
		closed: true,
		xM: road.xM,
		yM: road.yM,
		curvaturePerM: referenceLine.curvaturePerM,
		origin: options.without?.includes('positions') ? 'speedOnly' : 'positions',
		line: 'mark',
		speedKmh: reference.grid.speedKmh.slice(250, 250 + road.lengthM),
		frame: null
	};
	const driverHead = head('6', 'Mira Tansley', driver.grid, '2026-05-14T15:40:00Z', true);
	const referenceHead = head('3', 'Rhea Calloway', reference.grid, '2026-05-03T10:10:00Z', false);
	return {
		driver: driverHead,
		reference: referenceHead,
		layout: {
			id: '00000000000000000000000009',
			name: 'grand prix',
			circuit: { id: '00000000000000000000000008', name: 'Vallmere Park' },
			lengthM: road.lengthM,
			cornerCount: corners.length,
			outline: [],
			mayEdit: false
		},
		path,
		corners,
		cells: corners.map((corner) => ({ corners: [corner.number ?? 0], startM: corner.startM, endM: corner.endM })),
		comparison: {
			lap: driver.grid.lapNumber,
			referenceLap: reference.grid.lapNumber,
			deltaS: driver.grid.lapTimeS - reference.grid.lapTimeS,
			stepM: 1,
			delta,
			referenceMetrics: reference.metrics,
			ledger,
			findings,
			unexplained: ledger.map((row) => ({
				corner: row.corner,
				costS: row.totalS - findings.filter((f) => f.corner === row.corner).reduce((sum, f) => sum + (f.costS ?? 0), 0)
			}))
		},
		driverMetrics: driver.metrics,
		referenceMetrics: reference.metrics,
		runMetrics: driver.metrics,
		driverGrid: driver.grid,
		referenceGrid: reference.grid,
		runLaps: [driverHead],
		otherReferences: [referenceHead],
		fairness: [],
		warnings: [],
		contentHash: ''
	};
}

const onLap = (placeM: number, lengthM: number): number => ((placeM % lengthM) + lengthM) % lengthM;
const timeAt = (grid: LapGrid, s: number): number => grid.timeS[Math.round(s) + grid.marginM];

/** The same road counted from another line; a corner keeps its place in the order, so that the first one may begin before 0. */
function moveLine(road: CentreLine, byM: number): CentreLine {
	if (byM === 0) return road;
	const n = road.lengthM;
	const turn = (values: Float64Array): Float64Array => values.map((_, i) => values[(i + byM) % n]);
	const corners = road.corners
		.map((corner) => {
			const shift = corner.apexM - byM < 0 ? n - byM : -byM;
			return { ...corner, startM: corner.startM + shift, apexM: corner.apexM + shift, endM: corner.endM + shift };
		})
		.sort((a, b) => a.apexM - b.apexM);
	return {
		lengthM: n,
		xM: turn(road.xM),
		yM: turn(road.yM),
		normalX: turn(road.normalX),
		normalY: turn(road.normalY),
		corners
	};
}

/** Takes out channels and a stretch, as a poorer file would. */
function strip(lap: ExampleLap, { without = [], gap }: ExampleOptions, isDriver: boolean): ExampleLap {
	const grid = { ...lap.grid };
	if (without.includes('brake')) grid.brakePct = null;
	if (without.includes('throttle')) grid.throttlePct = null;
	if (without.includes('steering')) grid.steeringDeg = null;
	if (without.includes('positions')) grid.offsetM = null;
	if (gap && isDriver) {
		const cut = (values: Float64Array | null): Float64Array | null =>
			values && values.map((value, i) => (i - grid.marginM > gap[0] && i - grid.marginM < gap[1] ? NaN : value));
		grid.speedKmh = cut(grid.speedKmh) ?? grid.speedKmh;
		grid.brakePct = cut(grid.brakePct);
		grid.throttlePct = cut(grid.throttlePct);
		grid.steeringDeg = cut(grid.steeringDeg);
		grid.offsetM = cut(grid.offsetM);
	}
	const metrics = without.includes('brake')
		? lap.metrics.map((m) => ({ ...m, onsetM: null, onsetS: null, peakPct: null, peakM: null, releaseEndM: null }))
		: lap.metrics;
	return { grid, metrics };
}

function head(id: string, name: string, grid: LapGrid, startedAt: string, own: boolean): LapHead {
	return {
		id: id.padStart(26, '0'),
		runId: '1'.padStart(26, '0'),
		number: grid.lapNumber,
		kind: 'timed',
		timeS: grid.lapTimeS,
		clean: true,
		reasons: [],
		plusMinusS: 0,
		driver: { id: id.padStart(26, '0'), name },
		own,
		car: { id: '7'.padStart(26, '0'), name: 'Brindle GT' },
		place: 'real',
		conditions: 'dry',
		startedAt,
		shelfName: null
	};
}

function makeLedger(road: CentreLine, driver: ExampleLap, reference: ExampleLap, delta: number[]): LedgerRow[] {
	const n = road.lengthM;
	const between = (value: number, low: number, high: number): number => Math.min(high, Math.max(low, value));
	const earlier = (a: number | null, b: number | null): number | null =>
		a === null ? b : b === null ? a : Math.min(a, b);
	const starts = road.corners.map((corner, i) => {
		const onset = earlier(driver.metrics[i].onsetM, reference.metrics[i].onsetM);
		return Math.round(between(onset ?? corner.startM - 12, i === 0 ? 0 : road.corners[i - 1].apexM + 4, n));
	});
	const at = (s: number): number => delta[Math.round(between(s, 0, n))];
	const row = (corner: number, borders: [number, number, number, number], bendEndM: number): LedgerRow => {
		const [entryM, midM, exitM, endM] = borders;
		return {
			corner,
			entryM,
			midM,
			exitM,
			endM,
			entryS: at(midM) - at(entryM),
			midS: at(exitM) - at(midM),
			exitS: at(endM) - at(exitM),
			straightS: bendEndM < endM ? at(endM) - at(Math.max(exitM, bendEndM)) : 0,
			totalS: at(endM) - at(entryM)
		};
	};
	const rows = [row(0, [0, starts[0], starts[0], starts[0]], n)];
	road.corners.forEach((corner, i) => {
		const entryM = starts[i];
		const endM = i + 1 < starts.length ? starts[i + 1] : n;
		const midM = Math.round(between(corner.startM - 5, entryM, endM));
		const pickUp = earlier(driver.metrics[i].pickUpM, reference.metrics[i].pickUpM) ?? corner.apexM;
		const exitM = Math.round(between(between(pickUp, midM, corner.endM), entryM, endM));
		rows.push(row(i + 1, [entryM, midM, exitM, endM], corner.endM));
	});
	return rows;
}

/** Findings in the house's words, with invented shares of what the ledger holds; enough to set sentences and tags. */
function makeFindings(driver: CornerMetrics[], reference: CornerMetrics[], ledger: LedgerRow[]): Finding[] {
	const findings: Finding[] = [];
	driver.forEach((mine, i) => {
		const theirs = reference[i];
		const row = ledger[i + 1];
		const add = (
			code: Finding['code'],
			costS: number,
			evidence: Finding['evidence'],
			text: string,
			shown: number
		): void => {
			if (Math.abs(costS) < 0.015) return;
			findings.push({
				corner: i + 1,
				code,
				costS,
				plusMinusS: 0.02,
				habit: shown >= 5,
				habitLaps: { shown, of: 7 },
				shares: [{ corner: i + 1, costS }],
				evidence,
				text
			});
		};
		const say = (value: number, unit: string): string => `${Math.round(value)}\u00a0${unit}`;
		if (mine.onsetM !== null && theirs.onsetM !== null && theirs.onsetM - mine.onsetM >= 3)
			add(
				'brake_early',
				row.entryS * 0.55,
				[
					{
						quantity: 'onset',
						unit: 'm',
						driver: mine.onsetM,
						reference: theirs.onsetM,
						atM: mine.onsetM,
						plusMinus: 0.6
					}
				],
				`Brakes ${say(theirs.onsetM - mine.onsetM, 'm')} early: at ${say(mine.onsetM, 'm')}, not ${say(theirs.onsetM, 'm')}`,
				6
			);
		if (mine.peakPct !== null && theirs.peakPct !== null && mine.peakPct - theirs.peakPct > 8)
			add(
				'peak_over',
				row.entryS * 0.3,
				[
					{
						quantity: 'peak',
						unit: '%',
						driver: mine.peakPct,
						reference: theirs.peakPct,
						atM: mine.peakM,
						plusMinus: 1
					}
				],
				`Peaks at ${say(mine.peakPct, '%')}, not ${say(theirs.peakPct, '%')}, yet slows no harder: it brings nothing more`,
				3
			);
		if (mine.minKmh !== null && theirs.minKmh !== null && theirs.minKmh - mine.minKmh >= 0.8)
			add(
				'min_speed_low',
				row.midS * 0.8,
				[
					{
						quantity: 'minimum speed',
						unit: 'km/h',
						driver: mine.minKmh,
						reference: theirs.minKmh,
						atM: mine.minSpeedM,
						plusMinus: 0.3
					}
				],
				`Slowest at ${say(mine.minKmh, 'km/h')}, not ${say(theirs.minKmh, 'km/h')}`,
				5
			);
		if (mine.pickUpM !== null && theirs.pickUpM !== null && mine.pickUpM - theirs.pickUpM >= 4)
			add(
				'pick_up_late',
				row.exitS * 0.7,
				[
					{
						quantity: 'pick-up',
						unit: 'm',
						driver: mine.pickUpM,
						reference: theirs.pickUpM,
						atM: mine.pickUpM,
						plusMinus: 0.8
					}
				],
				`Waits ${say(mine.pickUpM - theirs.pickUpM, 'm')} for the throttle: picks it up at ${say(mine.pickUpM, 'm')}, not ${say(theirs.pickUpM, 'm')}`,
				7
			);
	});
	return findings.sort((a, b) => (b.costS ?? 0) - (a.costS ?? 0));
}
