import { TERN_HOLLOW, VALLMERE_GRAND_PRIX, VALLMERE_SHORT, type DemoCircuit } from './circuits.ts';
import { JONAS, MIRA, RHEA, TOMAS, type DemoDriver } from './driver.ts';
import { BRINDLE_GT, LARK_SINGLE_SEATER, TERN_KART, type DemoVehicle } from './vehicle.ts';

/** One recording of the demo scenario; all names and figures are invented. */
export interface DemoRun {
	key: string;
	fileName: string;
	circuit: DemoCircuit;
	driver: DemoDriver;
	vehicle: DemoVehicle;
	laps: number;
	sampleRateHz: number;
	/** local start, ISO 8601 */
	startedAt: string;
	habitShare: number;
	fallOffPerLap: number;
	intent: 'pace' | 'learning';
	run: number;
}

const run = (
	given: Partial<DemoRun> & Pick<DemoRun, 'key' | 'fileName' | 'driver' | 'startedAt' | 'run'>
): DemoRun => ({
	circuit: VALLMERE_GRAND_PRIX,
	vehicle: BRINDLE_GT,
	laps: 7,
	sampleRateHz: 50,
	habitShare: 1,
	fallOffPerLap: 0,
	intent: 'pace',
	...given
});

/** Eight runs: a coach's reference, a driver who improves, two other places, a stint of three drivers in one car. */
export const DEMO_RUNS: DemoRun[] = [
	run({
		key: 'reference',
		fileName: 'vallmere-gp-calloway-03-may.csv',
		driver: RHEA,
		startedAt: '2026-05-03T10:10:00Z',
		laps: 5,
		run: 1
	}),
	run({
		key: 'first',
		fileName: 'vallmere-gp-tansley-03-may-run-1.csv',
		driver: MIRA,
		startedAt: '2026-05-03T11:05:00Z',
		laps: 8,
		intent: 'learning',
		habitShare: 1.15,
		run: 2
	}),
	run({
		key: 'latest',
		fileName: 'vallmere-gp-tansley-14-may-run-2.csv',
		driver: MIRA,
		startedAt: '2026-05-14T15:40:00Z',
		laps: 8,
		habitShare: 0.9,
		run: 3
	}),
	run({
		key: 'short',
		fileName: 'vallmere-short-tansley-02-apr.csv',
		circuit: VALLMERE_SHORT,
		driver: MIRA,
		vehicle: LARK_SINGLE_SEATER,
		startedAt: '2026-04-02T14:00:00Z',
		laps: 9,
		run: 4
	}),
	run({
		key: 'kart',
		fileName: 'tern-hollow-tansley-11-mar.csv',
		circuit: TERN_HOLLOW,
		driver: MIRA,
		vehicle: TERN_KART,
		startedAt: '2026-03-11T17:20:00Z',
		laps: 12,
		sampleRateHz: 20,
		run: 5
	}),
	run({
		key: 'stint-1',
		fileName: 'fernbank-stint-1-velde.csv',
		driver: JONAS,
		startedAt: '2026-05-24T09:00:00Z',
		laps: 11,
		sampleRateHz: 25,
		fallOffPerLap: 0.0016,
		run: 6
	}),
	run({
		key: 'stint-2',
		fileName: 'fernbank-stint-2-tansley.csv',
		driver: MIRA,
		startedAt: '2026-05-24T09:24:00Z',
		laps: 11,
		sampleRateHz: 25,
		habitShare: 0.75,
		fallOffPerLap: 0.001,
		run: 7
	}),
	run({
		key: 'stint-3',
		fileName: 'fernbank-stint-3-ruud.csv',
		driver: TOMAS,
		startedAt: '2026-05-24T09:48:00Z',
		laps: 11,
		sampleRateHz: 25,
		fallOffPerLap: 0.0024,
		run: 8
	})
];
