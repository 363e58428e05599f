import { describe, expect, it } from 'vitest';
import type { Channels } from '../model.ts';
import { buildPath } from './buildPath.ts';
import { cornerElements, drive, straight, symmetricCircuit } from './testing/madeUpCircuit.ts';

const circuit = symmetricCircuit(
	[straight(180), ...cornerElements(-60, 45, 20), straight(60), ...cornerElements(150, 28, 14)],
	4
);
const L = circuit.lengthM;
const speedMps = (place: number) => 26 + 8 * Math.cos((8 * Math.PI * place) / L);
const { channels, placeM } = drive(circuit, { rateHz: 50, fromLap: -0.1, toLap: 3.1, speedMps });
const bends = placeM.map((place) => circuit.at(place).curvaturePerM);
const blind: Channels = {
	...channels,
	xM: null,
	yM: null,
	lapColumn: placeM.map((place) => Math.floor(place / L) + 1)
};

const sources: { name: string; origin: string; more: Partial<Channels> }[] = [
	{
		name: 'lateral acceleration with an offset',
		origin: 'latAcc',
		more: { accLatMps2: bends.map((bend, i) => bend * speedMps(placeM[i]) ** 2 + 0.15) }
	},
	{
		name: 'yaw rate with an offset',
		origin: 'yawRate',
		more: { yawRateRadps: bends.map((bend, i) => bend * speedMps(placeM[i]) + 0.004) }
	},
	{ name: 'steering of unknown ratio', origin: 'steering', more: { steeringDeg: bends.map((bend) => bend * 1900) } }
];

describe('a path without positions', () => {
	it.each(sources)('is drawn from $name, closed, with the right bends', ({ origin, more }) => {
		const { path, warnings } = buildPath({ ...blind, ...more });
		expect(path.origin).toBe(origin);
		expect(warnings.map(({ code }) => code)).toContain('path_from_accelerations');
		expect(Math.abs(path.lengthM / L - 1)).toBeLessThan(1e-3);
		let squares = 0;
		path.curvaturePerM.forEach(
			(bend, s) => (squares += (bend - circuit.at((s * L) / path.lengthM).curvaturePerM) ** 2)
		);
		expect(Math.sqrt(squares / path.curvaturePerM.length)).toBeLessThan(1.5e-3);
		const last = path.xM.length - 1;
		expect(Math.hypot(path.xM[last] - path.xM[0], path.yM[last] - path.yM[0])).toBeLessThan(3);
	});

	it('takes of two sensors the one that closes the lap', () => {
		const [accelerations, yaw] = sources;
		const wrong = { accLatMps2: accelerations.more.accLatMps2?.map((value) => 1.2 * value) ?? null };
		expect(buildPath({ ...blind, ...yaw.more, ...wrong }).path.origin).toBe('yawRate');
	});

	it('has a length and no shape with speed alone', () => {
		const { path, warnings } = buildPath(blind);
		expect(path.origin).toBe('speedOnly');
		expect(path.curvaturePerM.every(Number.isNaN)).toBe(true);
		expect(warnings.map(({ code }) => code)).toContain('speed_only');
	});
});
