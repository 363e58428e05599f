import { describe, expect, it } from 'vitest';
import { KerbnoteError } from '../../schemas/kerbnoteError.ts';
import type { Lap } from '../model.ts';
import { chooseLap } from './chooseLap.ts';

const lap = (number: number, timeS: number, changes: Partial<Lap> = {}): Lap => ({
	number,
	kind: 'timed',
	startS: 100 * number,
	endS: 100 * number + timeS,
	lengthM: 2000,
	clean: true,
	reasons: [],
	plusMinusS: 0,
	turn: number,
	...changes
});

const LAPS = [
	lap(0, 40, { kind: 'out', clean: false }),
	lap(1, 71),
	lap(2, 69, { clean: false, reasons: ['off_path'] }),
	lap(3, 70),
	lap(4, 30, { kind: 'in', clean: false })
];

describe('chooseLap', () => {
	it.each([
		{ name: 'the best clean lap', laps: LAPS, wanted: undefined, number: 3, noneClean: false },
		{ name: 'the lap asked for, clean or not', laps: LAPS, wanted: 2, number: 2, noneClean: false },
		{
			name: 'the fastest timed lap where none is clean, and says so',
			laps: LAPS.map((one) => ({ ...one, clean: false })),
			wanted: undefined,
			number: 2,
			noneClean: true
		},
		{
			name: 'the earlier of two equal laps',
			laps: [lap(1, 70), lap(2, 70)],
			wanted: undefined,
			number: 1,
			noneClean: false
		}
	])('takes $name', ({ laps, wanted, number, noneClean }) => {
		expect(chooseLap(laps, wanted, 'the comparison')).toMatchObject({ lap: { number }, noneClean });
	});

	it('has no lap for a run without a timed one', () => {
		expect(chooseLap([LAPS[0], LAPS[4]], undefined, 'the comparison')).toBeNull();
	});

	it.each([
		{ wanted: 9, message: 'the reference requires a lap of the file, got 9' },
		{ wanted: 4, message: 'the reference requires a timed lap, got lap 4, which is not complete' }
	])('refuses lap $wanted and names the laps there are', ({ wanted, message }) => {
		try {
			chooseLap(LAPS, wanted, 'the reference');
			expect.unreachable();
		} catch (error) {
			expect(error).toBeInstanceOf(KerbnoteError);
			expect(error).toMatchObject({
				code: 'no_such_lap',
				message,
				remedy: 'Choose one of the timed laps: 1, 2, 3.'
			});
		}
	});
});
