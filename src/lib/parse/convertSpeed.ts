import { unitById } from './columnUnits.ts';
import { quantile } from './columns.ts';
import { speedEvidence, speedUnitNear } from './speedEvidence.ts';
import type { UnitWork } from './unitWork.ts';

/**
 * Speed in km/h: the declared unit unless the way driven contradicts it by a whole unit; undeclared, the unit that the way driven or the
 * longitudinal acceleration proves, else by its size.
 */
export function convertSpeed(work: UnitWork): void {
	const speed = work.columns.get('speed');
	if (!speed) return;
	const declared = work.declared('speed');
	const evidence = speedEvidence(work.columns, work.seconds, speed, work.declared('accLong'));
	const proven = evidence && speedUnitNear(evidence.kmhPerUnit);
	if (declared) {
		// A name that the way driven contradicts by a whole unit was the wrong name; a smaller difference is the sensor's.
		const wrong =
			proven &&
			!work.plans.get('speed')?.mapped &&
			evidence.way &&
			Math.abs(Math.log(evidence.kmhPerUnit / declared.factor)) > 0.25;
		work.use('speed', wrong ? proven : declared);
		if (!wrong) return;
		const header = work.plans.get('speed')?.header ?? 'speed';
		work.warnings.push({
			code: 'speed_scale_differs',
			message: `column "${header}" says ${declared.id}, but ${evidence.source} says ${proven.id}, which was used`,
			row: null
		});
		return;
	}
	if (evidence && proven) return work.use('speed', proven, `${evidence.source} says ${proven.id}`);
	const top = quantile(speed, 0.99);
	const guess = unitById(top > 75 ? 'km/h' : 'm/s');
	work.use('speed', guess);
	work.assume('speed', `taken as ${guess.id} by its size`, 'speed_unit_assumed');
}
