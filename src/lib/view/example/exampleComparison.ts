import { compareLaps } from '../../analysis/compare/compareLaps.ts';
import type { LapGrid, ReferencePath } from '../../analysis/model.ts';
import { centreLine, type CentreLine } from '../../demo/centreLine.ts';
import { TERN_HOLLOW, VALLMERE_GRAND_PRIX } from '../../demo/circuits.ts';
import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { ComparisonView, CornerView, LapHead } from '../../schemas/views.ts';
import { exampleLine } from './exampleLine.ts';
import { exampleLap, REFERENCE_STYLE, type CornerStyle, type ExampleLap } from './exampleLap.ts';

export interface ExampleOptions {
	/** the kart circuit, where corners crowd */
	dense?: boolean;
	/** the circuit seen in a mirror, so that every right-hander is a left-hander */
	mirrored?: boolean;
	/** moves the start/finish line on by this many metres, so that a corner can span it */
	lineAtM?: number;
	/** channels that the file does not have */
	without?: ('brake' | 'throttle' | 'steering' | 'positions')[];
	/** drop-outs of the driver's recording, from and to in m */
	gaps?: [number, number][];
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
	const circuit = options.dense ? TERN_HOLLOW : VALLMERE_GRAND_PRIX;
	const vertices = circuit.vertices.map((vertex) => (options.mirrored ? { ...vertex, yM: -vertex.yM } : vertex));
	const road = moveLine(centreLine({ ...circuit, vertices }), options.lineAtM ?? 0);
	const referenceLine = exampleLine(road, 3.8, 0.6);
	const driverLine = exampleLine(road, 3.3, 0.46);
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
	const comparison = compareLaps({
		driver: { grid: driver.grid, metrics: driver.metrics },
		reference: { grid: reference.grid, metrics: reference.metrics },
		corners,
		run: { ...exampleRun(driver.metrics, reference.metrics), fullThrottle: null }
	});
	const path: ReferencePath = {
		lengthM: road.lengthM,
		closed: true,
		xM: withSeam(road.xM),
		yM: withSeam(road.yM),
		curvaturePerM: withSeam(referenceLine.curvaturePerM),
		origin: options.without?.includes('positions') ? 'speedOnly' : 'positions',
		line: 'mark',
		speedKmh: reference.grid.speedKmh.slice(250, 250 + road.lengthM + 1),
		frame: null
	};
	const driverHead = head('6', 'Mira Tansley', driver.grid, '2026-05-14T15:40:00Z', true);
	const referenceHead = head('3', 'Rhea Calloway', reference.grid, '2026-05-03T10:10:00Z', false);
	return {
		driver: driverHead,
		reference: referenceHead,
		layout: {
			id: '00000000000000000000000009',
			name: circuit.layout,
			circuit: { id: '00000000000000000000000008', name: circuit.circuit },
			lengthM: road.lengthM,
			cornerCount: corners.length,
			outline: [],
			mayEdit: false
		},
		path,
		corners,
		cells: corners.map((corner) => ({ corners: [corner.number ?? 0], startM: corner.startM, endM: corner.endM })),
		comparison,
		driverMetrics: driver.metrics,
		referenceMetrics: reference.metrics,
		runMetrics: exampleRun(driver.metrics, reference.metrics).metrics,
		driverGrid: driver.grid,
		referenceGrid: reference.grid,
		brakeScale: { driver: 1, reference: 1 },
		runLaps: [driverHead],
		otherReferences: [referenceHead],
		fairness: [],
		warnings: [],
		contentHash: ''
	};
}

const onLap = (placeM: number, lengthM: number): number => ((placeM % lengthM) + lengthM) % lengthM;

/** A whole number of metres: the stored place at the length is the first one again. */
const withSeam = (values: Float64Array): Float64Array => Float64Array.from([...values, values[0]]);

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
function strip(lap: ExampleLap, { without = [], gaps = [] }: ExampleOptions, isDriver: boolean): ExampleLap {
	const grid = { ...lap.grid };
	if (without.includes('brake')) grid.brakePct = null;
	if (without.includes('throttle')) grid.throttlePct = null;
	if (without.includes('steering')) grid.steeringDeg = null;
	if (without.includes('positions')) grid.offsetM = null;
	if (isDriver) {
		const lost = (s: number): boolean => gaps.some(([fromM, toM]) => s > fromM && s < toM);
		const cut = (values: Float64Array | null): Float64Array | null =>
			values && values.map((value, i) => (lost(i - grid.marginM) ? NaN : value));
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
		runId: `1${id}`.padStart(26, '0'),
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

/** Seven clean laps around the driver's: two of them are driven as the reference was, so that habits and one-offs both exist. */
function exampleRun(
	driver: CornerMetrics[],
	reference: CornerMetrics[]
): { metrics: CornerMetrics[]; cleanLaps: number[] } {
	const cleanLaps = [2, 3, 4, 5, 6, 7, 8];
	const metrics = cleanLaps.flatMap((lap) =>
		driver.map((own, i) => ({ ...(lap === 3 || (lap === 8 && i % 2 === 0) ? reference[i] : own), lap }))
	);
	return { metrics, cleanLaps };
}
