import { readTable } from '../../parse/readTable.ts';
import { KerbnoteError } from '../../schemas/kerbnoteError.ts';
import type { PedalDocument, PedalWarning } from '../../schemas/pedalDocument.ts';
import { judgePedal } from './judgePedal.ts';
import { judgeLiveSweep } from './judgeLiveSweep.ts';
import { isSweepHeader, readSweep, type SweepColumn } from './readSweep.ts';
import { findStrokes } from './strokes.ts';

/** Rest level above this share of the range is an offset, taken off. */
const LEAST_OFFSET = 0.01;

/**
 * Judges a brake sweep: exponent, dead zone, saturation, largest departure from a straight line, hysteresis, both halves; without a known
 * input only what the output alone can show.
 *
 * @param bytes the file, unpacked
 * @throws {KerbnoteError} `no_header` where no column can be the output, `too_few_samples` where the sweep holds fewer than 3 rows
 */
export function checkPedal(bytes: Uint8Array): PedalDocument {
	const sweep = readSweep(readTable(bytes, isSweepHeader));
	if (!sweep) {
		throw new KerbnoteError(
			'no_header',
			'the sweep requires a column with the output of the pedal, got none',
			'Name one column force (with its unit) and one column output, and separate them by a comma',
			{ row: 1 }
		);
	}
	const { output, warnings } = sweep;
	if (output.values.length < 3) {
		throw new KerbnoteError(
			'too_few_samples',
			`a sweep requires 3 rows of numbers, got ${output.values.length}`,
			'Press the pedal slowly from rest to full and back, and export all of it'
		);
	}
	const input = sweep.input && moves(sweep.input) ? sweep.input : null;
	if (!input) return judgeLiveSweep(output, warnings);
	const said: PedalWarning[] = [...warnings];
	const inputFull = input.full ?? largest(input);
	if (input.full === null) said.push('input_scale_assumed');
	const share = input.values.map((value) => Math.max(0, value / inputFull));
	const rest = restLevel(share, output);
	if (rest !== 0) said.push('offset_removed');
	const outputFull = output.full ?? largest(output);
	if (output.full === null) said.push('output_scale_assumed');
	const strokes = findStrokes(share);
	return judgePedal({
		input: { header: input.header, unit: input.unit, full: inputFull, known: input.full !== null },
		output: { header: output.header, unit: output.unit, full: outputFull, known: output.full !== null },
		samples: {
			input: share,
			output: output.values.map((value) => (value - rest) / (outputFull - rest)),
			direction: strokes.direction
		},
		sweeps: strokes.presses,
		warnings: said
	});
}

const largest = ({ values }: SweepColumn): number => values.reduce((most, value) => Math.max(most, value), 0) || 1;

function moves({ values }: SweepColumn): boolean {
	return values.some((value) => value !== values[0]);
}

/** The output with nothing on the pedal, where it is not zero. */
function restLevel(share: Float64Array, output: SweepColumn): number {
	if (output.unit === '%' || output.unit === '0..1') return 0;
	const atRest = output.values.filter((_, i) => share[i] < 0.003);
	const lowest = atRest.reduce((least, value) => Math.min(least, value), Infinity);
	return atRest.length > 0 && Math.abs(lowest) > LEAST_OFFSET * largest(output) ? lowest : 0;
}
