import type { StintDocument, StintWarning } from '../../schemas/stintDocument.ts';
import { quantile } from '../stats/quantile.ts';
import { chooseLaps, type RawStintLap } from './chooseLaps.ts';
import { findKnee } from './findKnee.ts';
import { fitStint, fuelCorrectedSlope, type FuelEffect } from './stintFit.ts';

/** Fewer laps than this make an interval that decides nothing. */
const FEW_LAPS = 6;

/**
 * Judges a stint: which laps speak for the pace, the net slope with its interval, and the tyre fall-off where the fuel effect is stated.
 *
 * @param laps in the order driven
 */
export function judgeStint(
	laps: readonly RawStintLap[],
	fuel: FuelEffect | undefined,
	noted: readonly StintWarning[] = []
): StintDocument {
	const chosen = chooseLaps(laps);
	const used = chosen.flatMap(({ number, timeS, representative }) =>
		representative && timeS !== null ? [{ number, timeS }] : []
	);
	const numbers = used.map((lap) => lap.number);
	const timesS = used.map((lap) => lap.timeS);
	const fit = fitStint(numbers, timesS);
	const knee = fit && findKnee(numbers, timesS);
	const warnings = [...noted];
	if (!fit) warnings.push('too_few_laps');
	else if (fit.n < FEW_LAPS) warnings.push('few_laps');
	if (knee) warnings.push('knee');
	if (!fuel) warnings.push('fuel_unknown');
	return {
		schema: 'kerbnote.stint/1',
		laps: chosen,
		fit: fit && {
			n: fit.n,
			slopeSPerLap: fit.slope,
			interceptS: fit.intercept,
			slopeSe: fit.slopeSe,
			slopeCi95: fit.slopeCi95,
			residualSdS: fit.residualSd,
			theilSenSPerLap: fit.theilSen,
			residualAutocorrelation: fit.autocorrelation
		},
		fuelCorrected: fit && fuel ? { slopeSPerLap: fuelCorrectedSlope(fit.slope, fuel), slopeSe: fit.slopeSe } : null,
		knee: knee && {
			lap: knee.lap,
			slopeBeforeSPerLap: knee.slopeBefore,
			slopeAfterSPerLap: knee.slopeAfter
		},
		bestS: timesS.length > 0 ? Math.min(...timesS) : null,
		medianS: timesS.length > 0 ? quantile(timesS, 0.5) : null,
		warnings
	};
}
