import { createReadStream } from 'node:fs';
import { readFile } from 'node:fs/promises';
import Papa from 'papaparse';
import { inferSchema, initParser } from 'udsv';
import { analyseRun } from '../../lib/analysis/analyseRun.ts';
import { compareLaps, type CompareInput } from '../../lib/analysis/compare/compareLaps.ts';
import { decodeTrace, encodeTrace } from '../../lib/server/db/traceCodec.ts';
import { TRACE_CHANNELS, TRACE_CHANNEL_NAMES } from '../../lib/server/db/traceChannels.ts';
import { readRunFile } from '../analyse/readRunFile.ts';

/** One thing that is measured, in a process of its own, so that memory and compiled code of one do not help another. */
export type BenchPart = (path: string) => Promise<Record<string, number>>;

/** The product's reader: bytes to columns. */
async function read(path: string): Promise<Record<string, number>> {
	const seconds = await bestOf(3, async () => void (await readRunFile(path)));
	return { seconds, peakMb: peakMb() };
}

/** The yardstick: PapaParse on a stream, strings made numbers by `Number` into growing columns. */
async function papaparse(path: string): Promise<Record<string, number>> {
	const seconds = await bestOf(3, () => readByPapaParse(path));
	return { seconds, peakMb: peakMb() };
}

/** Another yardstick: uDSV, the whole file as one string, typed columns. */
async function udsv(path: string): Promise<Record<string, number>> {
	const seconds = await bestOf(3, async () => {
		const text = await readFile(path, 'utf8');
		initParser(inferSchema(text)).typedCols(text);
	});
	return { seconds, peakMb: peakMb() };
}

/** From file to metrics of every lap and a comparison. */
async function job(path: string): Promise<Record<string, number>> {
	let parse = Infinity;
	let rest = Infinity;
	for (let i = 0; i < 2; i++) {
		const begun = performance.now();
		const raws = await readRunFile(path);
		const read = performance.now();
		analyseRun(raws, { reference: raws });
		parse = Math.min(parse, (read - begun) / 1000);
		rest = Math.min(rest, (performance.now() - read) / 1000);
	}
	return { seconds: parse + rest, parse, rest, peakMb: peakMb() };
}

/** What is done for one lap pair: the comparison, and the lap as it is stored. */
async function lap(path: string): Promise<Record<string, number>> {
	const analysis = analyseRun(await readRunFile(path));
	const [driver, reference] = analysis.grids;
	const { metrics } = analysis.document;
	const input: CompareInput = {
		driver: { grid: driver, metrics: metrics.filter(({ lap: number }) => number === driver.lapNumber) },
		reference: { grid: reference, metrics: metrics.filter(({ lap: number }) => number === reference.lapNumber) },
		corners: analysis.corners,
		run: { metrics, cleanLaps: [driver.lapNumber, reference.lapNumber], fullThrottle: analysis.fullThrottle }
	};
	const compareMs = 1000 * (await bestOf(20, async () => void compareLaps(input)));

	const columns = TRACE_CHANNEL_NAMES.flatMap((name) => {
		const values = driver[name];
		return values ? [{ values, stored: encodeTrace(values, TRACE_CHANNELS[name].perUnit) }] : [];
	});
	const points = driver.timeS.length;
	const storedBytes = columns.reduce((sum, { stored }) => sum + stored.payload.byteLength, 0);
	const decodeS = await bestOf(50, async () => {
		for (const { stored } of columns) decodeTrace(stored, (length) => new Float32Array(length));
	});
	return {
		compareMs,
		pathM: analysis.path.lengthM,
		corners: analysis.corners.length,
		points,
		channels: columns.length,
		storedKb: storedBytes / 1000,
		decodeMbPerS: (4 * points * columns.length) / 1e6 / decodeS
	};
}

export const BENCH_PARTS: Readonly<Record<string, BenchPart>> = { read, papaparse, udsv, job, lap };

function readByPapaParse(path: string): Promise<void> {
	let columns: Float32Array[] = [];
	let rows = 0;
	return new Promise((done, fail) => {
		Papa.parse<string[]>(createReadStream(path, { highWaterMark: 1 << 20 }), {
			chunk: ({ data }) => {
				if (columns.length === 0) columns = data[0].map(() => new Float32Array(1 << 16));
				for (const cells of data) {
					if (rows === columns[0].length) columns = columns.map(doubled);
					for (let column = 0; column < columns.length; column++) columns[column][rows] = Number(cells[column]);
					rows += 1;
				}
			},
			complete: () => done(),
			error: fail
		});
	});
}

function doubled(column: Float32Array): Float32Array<ArrayBuffer> {
	const larger = new Float32Array(2 * column.length);
	larger.set(column);
	return larger;
}

/** Seconds of the quickest of several runs: what the machine can do when nothing else wants it. */
async function bestOf(times: number, work: () => Promise<void>): Promise<number> {
	let best = Infinity;
	for (let i = 0; i < times; i++) {
		const begun = performance.now();
		await work();
		best = Math.min(best, (performance.now() - begun) / 1000);
	}
	return best;
}

function peakMb(): number {
	return process.resourceUsage().maxRSS / 1000;
}
