import type { BrakeUnit, Channel } from '../schemas/channels.ts';
import type { Warning } from '../schemas/analysisDocument.ts';
import { unitById } from './columnUnits.ts';
import type { Unit } from './columnUnits.ts';
import type { Column, Columns } from './columns.ts';
import { quantile, range } from './columns.ts';
import type { ColumnPlan } from './planColumns.ts';
import { speedEvidence, speedUnitNear } from './speedEvidence.ts';

export interface ResolvedUnits {
	/** by channel: the unit in the file as understood */
	units: Map<string, string>;
	brakeUnit: BrakeUnit | null;
	wheelUnit: 'kmh' | 'radps' | null;
	warnings: Warning[];
}

const WHEELS = ['wheelSpeedFl', 'wheelSpeedFr', 'wheelSpeedRl', 'wheelSpeedRr'] as const;
const G_RANGE = 6;

/**
 * Finds the unit of every column (declared, else by its values and by what physics ties it to) and converts the columns in place
 * to the house's units.
 *
 * @param seconds time of each row, increasing within a run
 * @param plans the plan of each channel's column
 */
export function resolveUnits(
	columns: Columns,
	seconds: Float64Array,
	plans: ReadonlyMap<string, ColumnPlan>
): ResolvedUnits {
	const resolver = new Resolver(columns, seconds, plans);
	return resolver.run();
}

class Resolver {
	readonly #columns: Columns;
	readonly #seconds: Float64Array;
	readonly #plans: ReadonlyMap<string, ColumnPlan>;
	readonly #units = new Map<string, string>();
	readonly #warnings: Warning[] = [];

	constructor(columns: Columns, seconds: Float64Array, plans: ReadonlyMap<string, ColumnPlan>) {
		this.#columns = columns;
		this.#seconds = seconds;
		this.#plans = plans;
	}

	run(): ResolvedUnits {
		this.#positions();
		this.#lengths();
		this.#speed();
		const brakeUnit = this.#brake('brake');
		this.#brake('brakeRear');
		this.#throttle();
		this.#steering();
		this.#accelerations();
		this.#yawRate();
		const wheelUnit = this.#wheels();
		this.#plainChannels();
		return { units: this.#units, brakeUnit, wheelUnit, warnings: this.#warnings };
	}

	#declared(channel: string): Unit | null {
		return this.#plans.get(channel)?.unit ?? null;
	}

	/** Notes the unit, converts the column, and says so where it was a guess. */
	#use(channel: Channel, unit: Unit, options: { assumed?: string; label?: string } = {}): void {
		const column = this.#columns.get(channel);
		if (!column) return;
		if (unit.factor !== 1) for (let i = 0; i < column.length; i++) column[i] *= unit.factor;
		this.#units.set(channel, options.label ?? unit.id);
		if (options.assumed) this.#assume(channel, options.assumed);
	}

	#assume(channel: string, because: string, code: Warning['code'] = 'unit_assumed'): void {
		const header = this.#plans.get(channel)?.header ?? channel;
		this.#warnings.push({ code, message: `column "${header}" names no unit, ${because}`, row: null });
	}

	#positions(): void {
		for (const channel of ['latitude', 'longitude'] as const) {
			const column = this.#columns.get(channel);
			if (!column) continue;
			const unit = this.#declared(channel);
			const { min, max } = range(column);
			const largest = Math.max(Math.abs(min), Math.abs(max));
			let label = 'deg';
			if (unit?.id === 'rad') this.#use(channel, unit);
			else if (largest > 1e6) {
				// Degrees times ten million, as receivers send them in whole numbers.
				for (let i = 0; i < column.length; i++) column[i] *= 1e-7;
				label = '1e-7 deg';
			} else if (largest > (channel === 'latitude' ? 90 : 180)) {
				for (let i = 0; i < column.length; i++) {
					const size = Math.abs(column[i]);
					const whole = Math.floor(size / 100);
					column[i] = Math.sign(column[i]) * (whole + (size - whole * 100) / 60);
				}
				label = 'ddmm.mmmm';
			}
			if (!this.#units.has(channel)) this.#units.set(channel, this.#plans.get(channel)?.angle ? 'deg min' : label);
			const side = this.#columns.get(channel === 'latitude' ? 'latitudeHemisphere' : 'longitudeHemisphere');
			if (side) for (let i = 0; i < column.length; i++) column[i] = Math.abs(column[i]) * side[i];
		}
	}

	#lengths(): void {
		for (const channel of ['distance', 'lapDistance', 'positionX', 'positionY', 'altitude'] as const) {
			if (this.#columns.has(channel)) this.#use(channel, this.#declared(channel) ?? unitById('m'));
		}
	}

	#speed(): void {
		const speed = this.#columns.get('speed');
		if (!speed) return;
		const declared = this.#declared('speed');
		const evidence = speedEvidence(this.#columns, this.#seconds, speed, this.#declared('accLong'));
		const proven = evidence && speedUnitNear(evidence.kmhPerUnit);
		if (declared) {
			// A name that the way driven contradicts by a whole unit was the wrong name; a smaller difference is the sensor's.
			const wrong =
				proven &&
				!this.#plans.get('speed')?.mapped &&
				evidence.way &&
				Math.abs(Math.log(evidence.kmhPerUnit / declared.factor)) > 0.25;
			this.#use('speed', wrong ? proven : declared);
			if (!wrong) return;
			const header = this.#plans.get('speed')?.header ?? 'speed';
			this.#warnings.push({
				code: 'speed_scale_differs',
				message: `column "${header}" says ${declared.id}, but ${evidence.source} says ${proven.id}, which was used`,
				row: null
			});
			return;
		}
		if (evidence && proven) return this.#use('speed', proven, { assumed: `${evidence.source} says ${proven.id}` });
		const top = quantile(speed, 0.99);
		const guess = unitById(top > 75 ? 'km/h' : 'm/s');
		this.#use('speed', guess);
		this.#assume('speed', `taken as ${guess.id} by its size`, 'speed_unit_assumed');
	}

	#brake(channel: 'brake' | 'brakeRear'): BrakeUnit | null {
		const column = this.#columns.get(channel);
		if (!column) return null;
		const plan = this.#plans.get(channel);
		const unit = plan?.unit ?? null;
		const { min: low, max: high } = range(column);
		if (unit?.id === 'switch' || (unit === null && isSwitch(column))) {
			for (let i = 0; i < column.length; i++)
				column[i] = Number.isNaN(column[i]) ? NaN : column[i] > (low + high) / 2 ? 1 : 0;
			this.#units.set(channel, 'switch');
			return 'switch';
		}
		if (unit?.dimension === 'ratio') {
			// A percentage whose largest value is 1 is a share that was called one.
			const share = unit.id === '%' && high > 0.2 && high <= 1.001 && high - low > 0.2;
			this.#use(channel, share ? unitById('0..1') : unit);
			return 'pct';
		}
		if (unit?.dimension === 'pressure') {
			this.#use(channel, unit);
			return 'bar';
		}
		if (unit?.dimension === 'force') {
			this.#use(channel, unit);
			return 'n';
		}
		if (unit !== null && unit.dimension !== 'count') {
			this.#units.set(channel, unit.id);
			return 'raw';
		}
		if (unit === null && low > -0.1 && high <= 1.05) {
			this.#use(channel, unitById('0..1'));
			return 'pct';
		}
		const pressure = /press|druck|圧|druk|pressao/i.test(
			plan?.header.normalize('NFD').replace(/[\u0300-\u036f]/g, '') ?? ''
		);
		if (unit === null && low > -10 && high <= 105 && !pressure) {
			this.#use(channel, unitById('%'), { assumed: 'taken as % by its range' });
			return 'pct';
		}
		if (unit === null && pressure && high <= 250) {
			this.#use(channel, unitById('bar'), { assumed: 'taken as bar by its range' });
			return 'bar';
		}
		this.#units.set(channel, 'raw counts');
		return 'raw';
	}

	#throttle(): void {
		const column = this.#columns.get('throttle');
		if (!column) return;
		const unit = this.#declared('throttle');
		const { min: low, max: high } = range(column);
		const share = low > -0.1 && high <= 1.05 && high - low > 0.2;
		if (unit?.dimension === 'ratio') return this.#use('throttle', unit.id === '%' && share ? unitById('0..1') : unit);
		if (unit === null && share) return this.#use('throttle', unitById('0..1'));
		if (unit === null && low > -10 && high <= 110)
			return this.#use('throttle', unitById('%'), { assumed: 'taken as % by its range' });
		// Counts, volts or degrees of the plate: scaled to the run's own rest and full later.
		const span = high - low;
		for (let i = 0; i < column.length; i++) column[i] = span > 0 ? ((column[i] - low) / span) * 100 : 0;
		this.#units.set('throttle', unit?.id ?? 'raw counts');
	}

	#steering(): void {
		const column = this.#columns.get('steering');
		if (!column) return;
		const unit = this.#declared('steering');
		if (unit?.dimension === 'angle') return this.#use('steering', unit);
		const largest = Math.max(Math.abs(quantile(column, 0.002)), Math.abs(quantile(column, 0.998)));
		if (unit === null && largest > 1.05 && largest <= 9.5)
			return this.#use('steering', unitById('rad'), { assumed: 'taken as rad by its range' });
		if (unit === null && largest > 9.5 && largest <= 1100)
			return this.#use('steering', unitById('deg'), { assumed: 'taken as degrees by its range' });
		this.#units.set('steering', unit?.id ?? 'raw counts');
	}

	#accelerations(): void {
		for (const channel of ['accLong', 'accLat'] as const) {
			const column = this.#columns.get(channel);
			if (!column) continue;
			const unit = this.#declared(channel);
			if (unit) {
				this.#use(channel, unit);
				continue;
			}
			const middle = quantile(column, 0.5);
			const size = Math.max(quantile(column, 0.98) - middle, middle - quantile(column, 0.02));
			const guess = unitById(size < G_RANGE ? 'g' : 'm/s²');
			this.#use(channel, guess, { assumed: `taken as ${guess.id} by its range` });
		}
	}

	#yawRate(): void {
		const column = this.#columns.get('yawRate');
		if (!column) return;
		const unit = this.#declared('yawRate');
		if (unit) return this.#use('yawRate', unit);
		const size = Math.max(quantile(column, 0.98), -quantile(column, 0.02));
		const guess = unitById(size > 4 ? 'deg/s' : 'rad/s');
		this.#use('yawRate', guess, { assumed: `taken as ${guess.id} by its range` });
	}

	/** All four wheels in one unit; where none is declared, the ratio to the car's speed tells rolling speed from rotation. */
	#wheels(): 'kmh' | 'radps' | null {
		const present = WHEELS.filter((wheel) => this.#columns.has(wheel));
		if (present.length === 0) return null;
		const declared = present.map((wheel) => this.#declared(wheel)).find((unit) => unit !== null) ?? null;
		const unit = declared ?? this.#wheelGuess(present[0]);
		for (const wheel of present)
			this.#use(wheel, unit, declared ? {} : { assumed: `taken as ${unit.id} by the car's speed` });
		return unit.dimension === 'speed' ? 'kmh' : 'radps';
	}

	#wheelGuess(wheel: Channel): Unit {
		const [wheels, speed] = [this.#columns.get(wheel), this.#columns.get('speed')];
		if (!wheels || !speed) return unitById('km/h');
		const ratio = quantile(speed, 0.8) / quantile(wheels, 0.8);
		const candidates = ['km/h', 'm/s', 'mph'].map(unitById);
		const near = candidates.find(({ factor }) => Math.abs(Math.log(ratio / factor)) < 0.08);
		// Rolling radii of 0.1 m (kart) to 0.5 m.
		return near ?? unitById('rad/s');
	}

	#plainChannels(): void {
		for (const channel of this.#columns.keys()) {
			if (this.#units.has(channel)) continue;
			const unit = this.#declared(channel);
			if (channel === 'heading' && unit?.id === 'rad') this.#use('heading', unit);
			else if (channel === 'engineSpeed')
				this.#use(
					'engineSpeed',
					unit?.id === 'rad/s'
						? { ...unit, factor: 60 / (2 * Math.PI) }
						: { id: '1/min', dimension: 'angularVelocity', factor: 1 }
				);
			else this.#units.set(channel, channel === 'heading' ? 'deg' : (unit?.id ?? ''));
		}
	}
}

/** Only two values, one of them 0, and the other 1, 100 or 255. */
function isSwitch(column: Column): boolean {
	let on = NaN;
	let seen = false;
	for (let i = 0; i < column.length; i++) {
		const value = column[i];
		if (value === 0 || Number.isNaN(value)) continue;
		if (seen && value !== on) return false;
		on = value;
		seen = true;
	}
	return seen && (on === 1 || on === 100 || on === 255);
}
