import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { cpus, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { z } from 'zod';
import { writeBenchFile, type BenchFile } from './bench/benchFiles.ts';
import { BENCH_PARTS } from './bench/benchParts.ts';
import { measurePandas } from './bench/measurePandas.ts';

/**
 * `npm run bench`: how fast, as ratios of things measured in this run on this machine; times alone only tell the order.
 * `bench part NAME FILE` measures one thing and prints it as JSON; the first form runs these, each in a process of its own.
 */

/** Timed laps of Vallmere Park for about an hour at 100 Hz. */
const HOUR_LAPS = 36;

const [word, name, path] = process.argv.slice(2);
if (word === 'part') console.log(JSON.stringify(await BENCH_PARTS[name](path)));
else await printTable();

async function printTable(): Promise<void> {
	const folder = mkdtempSync(join(tmpdir(), 'kerbnote-bench-'));
	try {
		const hour = await writeBenchFile(join(folder, 'hour.csv'), HOUR_LAPS);
		const tenth = await writeBenchFile(join(folder, 'tenth.csv'), Math.round(HOUR_LAPS / 10));
		const quoted = await writeBenchFile(join(folder, 'quoted.csv'), HOUR_LAPS, true);
		console.log(
			`Node ${process.versions.node}, ${cpus().length} × ${cpus()[0]?.model ?? 'unknown processor'}, ${today()}`
		);
		console.log(
			`hour: ${megabytes(hour)} MB, ${hour.rows} rows × 20 columns; best of several runs, each part in its own process\n`
		);

		const ours = measure('read', hour);
		const papa = measure('papaparse', hour);
		row('plain file, against PapaParse on a stream', papa.seconds / ours.seconds, '≥ 5', [
			`${rate(hour, ours.seconds)} against ${rate(hour, papa.seconds)} MB/s`
		]);
		const udsv = measure('udsv', hour);
		row('plain file, against uDSV into typed columns', udsv.seconds / ours.seconds, '≥ 3', [
			`${rate(hour, udsv.seconds)} MB/s, peak ${udsv.peakMb.toFixed(0)} MB`
		]);
		const pandas = measurePandas(hour.path);
		if (pandas === null) console.log('plain file, against pandas (C engine, float32): pandas is not on this machine');
		else {
			row('plain file, against pandas (C engine, float32)', pandas / ours.seconds, '≥ 1.2', [
				`${rate(hour, pandas)} MB/s`
			]);
		}
		const oursQuoted = measure('read', quoted);
		const papaQuoted = measure('papaparse', quoted);
		row('file of quoted cells, against the same', papaQuoted.seconds / oursQuoted.seconds, '≥ 0.8', [
			`${rate(quoted, oursQuoted.seconds)} against ${rate(quoted, papaQuoted.seconds)} MB/s`
		]);
		const job = measure('job', hour);
		const smallJob = measure('job', tenth);
		const growth = job.seconds / smallJob.seconds / (hour.rows / tenth.rows);
		row('whole job: time per row, an hour against a tenth', growth, '≤ 1.05', [
			`${job.seconds.toFixed(2)} s (reading ${job.parse.toFixed(2)}, the rest ${job.rest.toFixed(2)})`,
			`${smallJob.seconds.toFixed(2)} s for ${megabytes(tenth)} MB`
		]);
		row('whole job: peak memory, MB', job.peakMb, '≤ 400', [`reading alone ${ours.peakMb.toFixed(0)}`]);
		const lap = measure('lap', tenth);
		row('comparison of a lap pair, ms for 5 km', (lap.compareMs * 5000) / lap.pathM, '≤ 15', [
			`${lap.compareMs.toFixed(2)} ms, ${lap.pathM.toFixed(0)} m, ${lap.corners} corners`
		]);
		row(
			'stored lap, kB for 12 channels × 5,000 points',
			(lap.storedKb * 60_000) / (lap.points * lap.channels),
			'≤ 40',
			[`${lap.storedKb.toFixed(1)} kB, ${lap.channels} channels × ${lap.points} points`]
		);
		row('decoding of a stored lap, MB/s of Float32', lap.decodeMbPerS, '≥ 400', []);
	} finally {
		rmSync(folder, { recursive: true, force: true });
	}
}

function measure(part: string, file: BenchFile): Record<string, number> {
	const { status, stdout, stderr } = spawnSync(
		process.execPath,
		[...process.execArgv, fileURLToPath(import.meta.url), 'part', part, file.path],
		{ encoding: 'utf8' }
	);
	if (status !== 0) throw new Error(`bench part ${part} failed: ${stderr}`);
	return z.record(z.string(), z.number()).parse(JSON.parse(stdout));
}

/** One line of the table: what, the figure, its bar, whether it holds, and the parts that it is made of. */
function row(what: string, figure: number, bar: string, parts: string[]): void {
	const [sign, limit] = bar.split(' ');
	const holds = sign === '≥' ? figure >= Number(limit) : figure <= Number(limit);
	const columns = [what.padEnd(50), figure.toFixed(2).padStart(9), bar.padStart(8), holds ? 'holds' : 'FALLS SHORT'];
	console.log(`${columns.join('  ')}${parts.length > 0 ? `   (${parts.join('; ')})` : ''}`);
}

function rate(file: BenchFile, seconds: number): string {
	return (file.bytes / 1e6 / seconds).toFixed(0);
}

function megabytes(file: BenchFile): string {
	return (file.bytes / 1e6).toFixed(1);
}

function today(): string {
	return new Date().toISOString().slice(0, 10);
}
