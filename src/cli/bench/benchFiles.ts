import { createWriteStream } from 'node:fs';
import { once } from 'node:events';
import { DEMO_RUNS } from '../../lib/demo/demoRuns.ts';
import { seededRandom } from '../../lib/demo/seededRandom.ts';
import { writeRun } from '../../lib/demo/writeRun.ts';

/** Sensors that no analysis needs, but that a logger writes all the same: they bring a row to 20 columns. */
const FURTHER_COLUMNS = [
	'water temperature (°C)',
	'oil pressure (bar)',
	'fuel level (l)',
	'battery (V)',
	'damper FL (mm)',
	'damper FR (mm)',
	'damper RL (mm)'
];

export interface BenchFile {
	path: string;
	rows: number;
	bytes: number;
}

/**
 * Writes a long recording of the demo's circuit at 100 Hz with 20 columns: about 7 MB for every eight minutes.
 *
 * @param laps  timed laps to drive
 * @param quoted  every cell in quotes: the way that takes a real CSV reader
 */
export async function writeBenchFile(path: string, laps: number, quoted = false): Promise<BenchFile> {
	const text = writeRun({ ...DEMO_RUNS[0], laps, sampleRateHz: 100 });
	const lines = text.trimEnd().split('\n');
	const headerAt = lines.findIndex((line) => line.startsWith('time'));
	const noise = seededRandom(7);
	const out = createWriteStream(path, { highWaterMark: 1 << 20 });
	let bytes = 0;
	for (let i = headerAt; i < lines.length; i++) {
		const further =
			i === headerAt
				? FURTHER_COLUMNS
				: FURTHER_COLUMNS.map((_, column) => (20 * (column + 1) + noise.normal()).toFixed(3));
		const cells = [...lines[i].split(','), ...further];
		const line = `${quoted ? cells.map((cell) => `"${cell}"`).join(',') : cells.join(',')}\n`;
		bytes += Buffer.byteLength(line);
		if (!out.write(line)) await once(out, 'drain');
	}
	out.end();
	await once(out, 'finish');
	return { path, rows: lines.length - headerAt - 1, bytes };
}
