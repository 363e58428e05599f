import type { Channel } from '$lib/schemas/channels';
import type {
	LapHead,
	LapRow,
	LayoutHead,
	NotebookView,
	PersonHead,
	RunListItem,
	RunView,
	UploadView
} from '$lib/schemas/views';

/** Invented views, as the services hand them to pages: what the gallery shows while a page is drawn. */

const id = (text: string) =>
	text
		.toLowerCase()
		.replace(/[^0-9a-hjkmnp-tv-z]/g, '0')
		.padEnd(26, '0')
		.slice(0, 26);

const mira: PersonHead = { id: id('mira'), name: 'Mira Tansley' };
const rhea: PersonHead = { id: id('rhea'), name: 'Rhea Calloway' };
const brindle = { id: id('brindle'), name: 'Brindle GT' };
const circuit = { id: id('vallmere'), name: 'Vallmere Park' };

const outline: [number, number][] = Array.from({ length: 120 }, (_, index) => {
	const turn = (index / 120) * 2 * Math.PI;
	const radius = 400 + 140 * Math.sin(3 * turn) + 90 * Math.cos(2 * turn + 1);
	return [radius * Math.cos(turn) * 1.2, radius * Math.sin(turn)];
});

const grandPrix: LayoutHead = {
	id: id('gp'),
	name: 'grand prix',
	circuit,
	lengthM: 3621,
	cornerCount: 12,
	outline,
	mayEdit: true
};
const short: LayoutHead = {
	...grandPrix,
	id: id('short'),
	name: 'short',
	lengthM: 1990,
	cornerCount: 7,
	outline: outline.map(([x, y]) => [x, y * 0.4])
};

const times: [LapRow['kind'], number, LapRow['reasons']][] = [
	['out', 108.46, ['out_lap']],
	['timed', 99.31, []],
	['timed', 98.702, []],
	['timed', 98.455, []],
	['timed', 98.104, []],
	['timed', 98.947, []],
	['timed', 104.39, ['off_path', 'slow']],
	['timed', 99.022, []],
	['in', 122.67, ['in_lap', 'pit_lane']]
];
let startS = 0;
const laps: LapRow[] = times.map(([kind, timeS, reasons], index) => {
	const lap: LapRow = {
		id: id(`tap${index + 1}`),
		number: index + 1,
		kind,
		startS,
		timeS,
		lengthM: 3621,
		clean: kind === 'timed' && reasons.length === 0,
		reasons,
		plusMinusS: 0,
		cellS: []
	};
	startS += timeS;
	return lap;
});

const lapHead = (lap: LapRow, driver: PersonHead): LapHead => ({
	...lap,
	runId: id('run2'),
	driver,
	own: driver === mira,
	car: brindle,
	place: 'real',
	conditions: 'dry',
	startedAt: '2026-05-14T14:05:00.000Z',
	shelfName: null
});
const own = lapHead(laps[4], mira);
const reference: LapHead = {
	...lapHead(laps[4], rhea),
	id: id('rheatap'),
	runId: id('rhearun'),
	timeS: 97.663,
	startedAt: '2026-05-03T10:00:00.000Z',
	shelfName: 'Rhea, May'
};

const names =
	'Fernside,Sallow,Ridge End,Tern Hairpin,Weir,Long Meadow,Orchard,Lime Kiln,Old Barn,Millrace,Heron,Gatehouse'.split(
		','
	);

export const run: RunView = {
	id: id('run2'),
	driver: mira,
	own: true,
	layout: grandPrix,
	car: brindle,
	place: 'real',
	conditions: 'dry',
	startedAt: '2026-05-14T14:05:00.000Z',
	uploadedAt: '2026-05-14T18:05:00.000Z',
	runOfDay: 2,
	timedLaps: 7,
	cleanLaps: 6,
	bestLap: { id: laps[4].id, timeS: 98.104, clean: true },
	theoreticalBestS: 97.702,
	intent: 'pace',
	tyreSet: 'B',
	fuelKg: 38,
	upload: { id: id('up1'), fileName: 'vallmere_0514_run2.csv' },
	sampleRateHz: 100,
	pathOrigin: 'positions',
	channels: ['speed', 'brake', 'throttle', 'steering'],
	warnings: [],
	laps,
	corners: names.map((name, index) => ({
		id: id(`c${String(index).padStart(2, '0')}`),
		name: index === 2 ? null : name,
		number: index + 1,
		startM: 250 + index * 270,
		apexM: 290 + index * 270,
		apex2M: null,
		endM: 350 + index * 270,
		direction: index % 3 ? 'right' : 'left',
		minRadiusM: 18 + index * 6,
		angleDeg: 60 + index * 8,
		linkedTo: null,
		kind: 'braked'
	})),
	cells: [],
	spread: names.map((_, index) => ({
		corner: index + 1,
		laps: 6,
		bestS: 5.1 + index * 0.41,
		medianS: 5.24 + index * 0.41 + (index === 3 ? 0.2 : 0),
		sdS: index === 3 ? 0.184 : 0.04 + index * 0.004,
		bestLapId: laps[1 + (index % 6)].id,
		minKmhBest: 60 + index * 9,
		minKmhMedian: 59 + index * 9
	})),
	suggestion: { lap: own, reference, why: 'coach_shelf' },
	references: [
		reference,
		{ ...own, id: id('own2'), runId: id('run1'), timeS: 98.56, startedAt: '2026-05-03T10:00:00.000Z' }
	],
	mayEdit: true
};

const item = (changes: Partial<RunListItem>): RunListItem => ({ ...run, ...changes });
export const runs: RunListItem[] = [
	item({}),
	item({ id: id('run1'), runOfDay: 1, timedLaps: 6, bestLap: { id: id('a'), timeS: 98.56, clean: true } }),
	item({
		id: id('run0'),
		startedAt: '2026-05-03T09:00:00.000Z',
		runOfDay: 3,
		timedLaps: 9,
		bestLap: { id: id('b'), timeS: 98.913, clean: false }
	}),
	item({
		id: id('run9'),
		layout: short,
		startedAt: null,
		runOfDay: 1,
		timedLaps: 0,
		cleanLaps: 0,
		bestLap: null,
		theoreticalBestS: null
	})
];

export const notebook: NotebookView = {
	driver: mira,
	own: true,
	pages: [
		{
			layout: grandPrix,
			car: brindle,
			runs: 6,
			lastRunAt: '2026-05-14T14:05:00.000Z',
			lastRunId: id('run2'),
			bestLap: { id: laps[4].id, runId: id('run2'), timeS: 98.104 },
			theoreticalBestS: 97.702,
			progress: names.map((name, index) => ({
				corners: [index + 1],
				names: [name],
				points: Array.from({ length: 6 }, (_, point) => ({
					runId: id(`r${point}`),
					startedAt: '2026-05-03T09:00:00.000Z',
					bestS: 6 + 0.3 * Math.abs(Math.sin(index * 2)) - point * 0.02 * (index % 4),
					medianS: 6.4
				})),
				referenceS: 6
			})),
			suggestion: { lap: own, reference, why: 'coach_shelf' }
		},
		{
			layout: short,
			car: brindle,
			runs: 1,
			lastRunAt: '2026-04-02T14:05:00.000Z',
			lastRunId: id('run9'),
			bestLap: { id: id('s'), runId: id('run9'), timeS: 62.881 },
			theoreticalBestS: 62.54,
			progress: [],
			suggestion: null
		}
	],
	latestRuns: runs,
	totalRuns: 8,
	openUploads: [],
	others: []
};

export const emptyNotebook: NotebookView = { ...notebook, pages: [], latestRuns: [], totalRuns: 0 };

const column = (
	header: string,
	channel: Channel | null,
	unit: string,
	samples: string,
	min: number,
	max: number,
	confidence = 1
) => ({ header, channel, unit, confidence, min, max, samples: samples.split(' ') });

export const upload: UploadView = {
	id: id('up1'),
	fileName: 'vallmere_0514_run2.csv',
	kind: 'file',
	archive: null,
	sizeBytes: 18_400_000,
	receivedBytes: 18_400_000,
	rowsRead: 92_210,
	mapping: null,
	remembered: null,
	shareableWith: [],
	files: [],
	state: 'analysed',
	stage: 'done',
	progress: 1,
	createdAt: '2026-05-14T18:05:00.000Z',
	error: null,
	runIds: [id('run2')],
	sha256: null,
	understood: {
		rows: 92210,
		sampleRateHz: 100,
		columns: [
			column('t_sec', 'time', 's', '0.000 0.010 0.020 0.030', 0, 922.1),
			column('v_ms', 'speed', 'm/s', '43.48 43.61 43.75', 0, 231),
			column('brk_bar', 'brake', 'bar', '0.0 12.4 46.1 62.3', 0, 68.2),
			column('thr', 'throttle', '0..1', '1.000 0.742 0.000', 0, 100),
			column('steer_rad', 'steering', 'rad', '-0.021 -0.034 -0.210', -184, 171, 0.7),
			column('gear', 'gear', '', '5 5 4 3', 1, 6),
			column('lap_no', 'lap', '', '0 1 2 3', 0, 8),
			column('oil_t', null, '', '93 93 93', 80, 101),
			column('tyre_fl', null, '', '93 93 93', 80, 101)
		],
		warnings: [
			{ code: 'brake_scale_assumed', message: 'brake is a pressure; 65 bar is taken as full pedal', row: null }
		],
		encoding: 'utf-8',
		delimiter: ',',
		decimal: '.',
		headerRow: 14,
		metadata: {}
	},
	absent: [
		{ channel: 'distance', instead: 'from speed and positions' },
		{ channel: 'wheelSpeedFl', instead: null }
	],
	runs: [
		{
			id: id('run2'),
			layout: grandPrix,
			layoutKnown: true,
			car: brindle,
			startedAt: run.startedAt,
			laps,
			bestLapId: laps[4].id,
			theoreticalBestS: 97.702,
			warnings: [],
			speedStrip: {
				durationS: startS,
				lowKmh: Array.from({ length: 600 }, (_, index) => 120 + 90 * Math.sin(index / 3.1) * Math.cos(index / 11)),
				highKmh: Array.from({ length: 600 }, (_, index) => 130 + 90 * Math.sin(index / 3.1) * Math.cos(index / 11))
			}
		}
	]
};

export const refusedUpload: UploadView = {
	...upload,
	state: 'refused',
	understood: null,
	absent: [],
	runs: [],
	runIds: [],
	fileName: 'warmup.csv',
	error: {
		code: 'missing_speed',
		message: 'the file has neither speed nor distance nor position',
		row: 14,
		column: null,
		remedy: 'Export the run again with a speed, distance or position column.'
	}
};
