import { MPS2_PER_G, RAD_PER_DEG } from '../units.ts';
import { centreLine } from './centreLine.ts';
import type { DemoRun } from './demoRuns.ts';
import { driveRun } from './driveRun.ts';

/** WGS84 (NIMA TR8350.2): metres per radian of latitude and longitude at a latitude; ample for an invented place. */
function metresPerRadian(latitudeDeg: number): { north: number; east: number } {
	const a = 6_378_137;
	const e2 = 0.00669437999014;
	const w = 1 - e2 * Math.sin(latitudeDeg * RAD_PER_DEG) ** 2;
	return { north: (a * (1 - e2)) / w ** 1.5, east: (a * Math.cos(latitudeDeg * RAD_PER_DEG)) / Math.sqrt(w) };
}

/**
 * Writes a run of the demo as the CSV that a logger would have saved: the demo then takes the same way in as anybody's file.
 *
 * @returns text with a few lines on who and what, a header line, comma separated, LF line ends
 */
export function writeRun(demo: DemoRun): string {
	const driven = driveRun(centreLine(demo.circuit), demo);
	const { north, east } = metresPerRadian(demo.circuit.latitudeDeg);
	const header =
		'time (s),lap,distance (m),speed (km/h),throttle (%),brake (%),steering (deg),gear,engine speed (1/min),' +
		'latitude (deg),longitude (deg),longitudinal acceleration (g),lateral acceleration (g)';
	const lines = [
		`driver,${demo.driver.name}`,
		`car,${demo.vehicle.name}`,
		`circuit,${demo.circuit.circuit}`,
		`layout,${demo.circuit.layout}`,
		'',
		header
	];
	driven.timeS.forEach((time, i) => {
		lines.push(
			[
				time.toFixed(3),
				driven.lap[i],
				driven.distanceM[i].toFixed(2),
				driven.speedKmh[i].toFixed(2),
				driven.throttlePct[i].toFixed(1),
				driven.brakePct[i].toFixed(1),
				driven.steeringDeg[i].toFixed(1),
				driven.gear[i],
				driven.engineSpeedRpm[i],
				(demo.circuit.latitudeDeg + driven.yM[i] / north / RAD_PER_DEG).toFixed(8),
				(demo.circuit.longitudeDeg + driven.xM[i] / east / RAD_PER_DEG).toFixed(8),
				(driven.accLongMps2[i] / MPS2_PER_G).toFixed(3),
				(driven.accLatMps2[i] / MPS2_PER_G).toFixed(3)
			].join(',')
		);
	});
	return lines.join('\n') + '\n';
}
