import type { Channel } from '../schemas/channels.ts';
import { unitById } from './columnUnits.ts';
import type { Unit } from './columnUnits.ts';
import { quantile } from './columns.ts';
import type { UnitWork } from './unitWork.ts';

export const WHEEL_CHANNELS = ['wheelSpeedFl', 'wheelSpeedFr', 'wheelSpeedRl', 'wheelSpeedRr'] as const;

/**
 * All four wheels in one unit: km/h, or rad/s where they are rotation; where none is declared, the ratio to the car's speed tells.
 *
 * @returns null where there are none
 */
export function convertWheels(work: UnitWork): 'kmh' | 'radps' | null {
	const present = WHEEL_CHANNELS.filter((wheel) => work.columns.has(wheel));
	if (present.length === 0) return null;
	const declared = present.map((wheel) => work.declared(wheel)).find((unit) => unit !== null) ?? null;
	const unit = declared ?? guess(work, present[0]);
	for (const wheel of present) work.use(wheel, unit, declared ? undefined : `taken as ${unit.id} by the car's speed`);
	return unit.dimension === 'speed' ? 'kmh' : 'radps';
}

function guess(work: UnitWork, wheel: Channel): Unit {
	const [wheels, speed] = [work.columns.get(wheel), work.columns.get('speed')];
	if (!wheels || !speed) return unitById('km/h');
	const ratio = quantile(speed, 0.8) / quantile(wheels, 0.8);
	const candidates = ['km/h', 'm/s', 'mph'].map(unitById);
	const near = candidates.find(({ factor }) => Math.abs(Math.log(ratio / factor)) < 0.08);
	// Rolling radii of 0.1 m (kart) to 0.5 m.
	return near ?? unitById('rad/s');
}
