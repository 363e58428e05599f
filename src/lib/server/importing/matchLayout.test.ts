import { describe, expect, it } from 'vitest';
import type { ReferencePath } from '../../analysis/model.ts';
import { matchesLayout } from './matchLayout.ts';

/** A closed path by its heading: sides and bends of a made-up circuit, walked metre by metre. */
function path(legs: readonly { lengthM: number; turnDeg: number }[], over: Partial<ReferencePath> = {}): ReferencePath {
	const xM: number[] = [];
	const yM: number[] = [];
	const speedKmh: number[] = [];
	let heading = 0;
	let [x, y] = [0, 0];
	for (const { lengthM, turnDeg } of legs) {
		for (let i = 0; i < lengthM; i++) {
			xM.push(x);
			yM.push(y);
			speedKmh.push(turnDeg === 0 ? 180 : 80);
			heading += (turnDeg * Math.PI) / 180 / lengthM;
			x += Math.cos(heading);
			y += Math.sin(heading);
		}
	}
	return {
		lengthM: xM.length,
		closed: true,
		xM: Float64Array.from(xM),
		yM: Float64Array.from(yM),
		curvaturePerM: new Float64Array(xM.length),
		speedKmh: Float64Array.from(speedKmh),
		origin: 'positions',
		line: 'mark',
		frame: null,
		...over
	};
}

const straight = (lengthM: number) => ({ lengthM, turnDeg: 0 });
const bend = (turnDeg: number, lengthM = 60) => ({ lengthM, turnDeg });

/** 1 740 m, four unequal sides. */
const CIRCUIT = [
	straight(600),
	bend(90),
	straight(250),
	bend(90),
	straight(440),
	bend(50),
	straight(150),
	bend(130, 100)
];
const OTHER = [straight(300), bend(90), straight(520), bend(90), straight(280), bend(90), straight(400), bend(90)];

const reversed = (own: ReferencePath): ReferencePath => ({
	...own,
	xM: own.xM.slice().reverse(),
	yM: own.yM.slice().reverse(),
	speedKmh: own.speedKmh.slice().reverse()
});

function moved(own: ReferencePath, turnDeg: number, startM: number): ReferencePath {
	const angle = (turnDeg * Math.PI) / 180;
	const at = (column: Float64Array) => Float64Array.from(column, (_, i) => column[(i + startM) % column.length]);
	const [x, y] = [at(own.xM), at(own.yM)];
	return {
		...own,
		xM: x.map((value, i) => value * Math.cos(angle) - y[i] * Math.sin(angle) + 5000),
		yM: x.map((value, i) => value * Math.sin(angle) + y[i] * Math.cos(angle) - 300),
		speedKmh: at(own.speedKmh)
	};
}

const mirrored = (own: ReferencePath): ReferencePath => ({ ...own, yM: own.yM.map((value) => -value) });

describe('matchesLayout', () => {
	const here = { latitudeDeg: 47, longitudeDeg: 11 };
	const known = path(CIRCUIT);
	const onEarth = path(CIRCUIT, { frame: here });

	it.each([
		{ name: 'itself', own: known, layout: known, expected: true },
		{ name: 'itself, turned, moved and begun elsewhere', own: moved(known, 73, 800), layout: known, expected: true },
		{
			name: 'itself on a line three metres out',
			own: moved(path(CIRCUIT.map(wider)), 10, 0),
			layout: known,
			expected: true
		},
		{ name: 'itself the other way round', own: reversed(known), layout: known, expected: false },
		{ name: 'its mirror image', own: mirrored(known), layout: known, expected: false },
		{ name: 'another circuit of about its length', own: path(OTHER), layout: known, expected: false },
		{ name: 'a shorter layout', own: path(CIRCUIT.slice(1)), layout: known, expected: false },
		{ name: 'itself on earth', own: onEarth, layout: onEarth, expected: true },
		{ name: 'itself on earth the other way round', own: reversed(onEarth), layout: onEarth, expected: false },
		{
			name: 'the same shape, ten kilometres away',
			own: path(CIRCUIT, { frame: { ...here, latitudeDeg: 47.1 } }),
			layout: onEarth,
			expected: false
		},
		{
			name: 'half a lap of it on earth',
			own: { ...path(CIRCUIT.slice(0, 4), { frame: here }), closed: false },
			layout: onEarth,
			expected: true
		},
		{ name: 'its speeds without a shape', own: path(CIRCUIT, { origin: 'speedOnly' }), layout: known, expected: true },
		{
			name: 'its speeds, begun elsewhere',
			own: { ...moved(known, 0, 500), origin: 'speedOnly' as const },
			layout: known,
			expected: true
		},
		{
			name: 'the speeds of another circuit',
			own: path(OTHER, { origin: 'speedOnly' }),
			layout: path(CIRCUIT, { lengthM: 1740 }),
			expected: false
		},
		{ name: 'half a lap without positions on earth', own: { ...known, closed: false }, layout: known, expected: false }
	])('says $expected of $name', ({ own, layout, expected }) => {
		expect(matchesLayout(own, layout)).toBe(expected);
	});
});

/** The same bends three metres further out are that much longer. */
function wider(leg: { lengthM: number; turnDeg: number }): { lengthM: number; turnDeg: number } {
	return { ...leg, lengthM: Math.round(leg.lengthM + (3 * Math.abs(leg.turnDeg) * Math.PI) / 180) };
}
