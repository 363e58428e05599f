/** A point-mass car: enough physics that time follows from pedals, and no more. Invented figures. */
export interface DemoVehicle {
	name: string;
	/** acceleration at low speed, m/s² */
	tractionMps2: number;
	/** power over mass, W/kg */
	powerPerKg: number;
	/** drag, 1/m: deceleration is drag · v² */
	dragPerM: number;
	rollingMps2: number;
	/** deceleration that a pedal at 100 % would give if the tyres let it, m/s² */
	brakeMps2: number;
	/** share of the pedal beyond which the tyres give no more */
	brakeKnee: number;
	/** steady cornering, m/s² */
	lateralMps2: number;
	wheelbaseM: number;
	/** hand wheel over road wheel */
	steeringRatio: number;
	topGear: number;
	/** speed at the limiter in top gear, m/s */
	topSpeedMps: number;
	limiterRpm: number;
}

export const BRINDLE_GT: DemoVehicle = {
	name: 'Brindle GT',
	tractionMps2: 5.9,
	powerPerKg: 262,
	dragPerM: 0.00072,
	rollingMps2: 0.16,
	brakeMps2: 14.2,
	brakeKnee: 0.78,
	lateralMps2: 13.4,
	wheelbaseM: 2.62,
	steeringRatio: 13.5,
	topGear: 6,
	topSpeedMps: 78,
	limiterRpm: 8200
};

export const LARK_SINGLE_SEATER: DemoVehicle = {
	...BRINDLE_GT,
	name: 'Lark single-seater',
	tractionMps2: 6.4,
	powerPerKg: 245,
	dragPerM: 0.00095,
	brakeMps2: 16.5,
	lateralMps2: 15.8,
	wheelbaseM: 2.55,
	steeringRatio: 11
};

export const TERN_KART: DemoVehicle = {
	...BRINDLE_GT,
	name: 'Kart',
	tractionMps2: 3.4,
	powerPerKg: 52,
	dragPerM: 0.0021,
	rollingMps2: 0.3,
	brakeMps2: 9.5,
	brakeKnee: 0.8,
	lateralMps2: 13,
	wheelbaseM: 1.05,
	steeringRatio: 1.4,
	topGear: 1,
	topSpeedMps: 26,
	limiterRpm: 6200
};

/** Longitudinal acceleration in m/s² for pedals in 0–1; grip scales what the tyres give. */
export function accelerationMps2(
	vehicle: DemoVehicle,
	speedMps: number,
	throttle: number,
	brake: number,
	grip: number
): number {
	const engine = throttle * Math.min(vehicle.tractionMps2, vehicle.powerPerKg / Math.max(speedMps, 4));
	const useful = brake <= vehicle.brakeKnee ? brake : vehicle.brakeKnee + (brake - vehicle.brakeKnee) * 0.08;
	return engine - useful * vehicle.brakeMps2 * grip - vehicle.dragPerM * speedMps * speedMps - vehicle.rollingMps2;
}
