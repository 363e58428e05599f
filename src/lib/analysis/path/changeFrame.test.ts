import { describe, expect, it } from 'vitest';
import { toLocalMetres } from '../channels/localFrame.ts';
import { changeFrame } from './changeFrame.ts';

describe('changeFrame', () => {
	// the tangent plane itself is held against GeographicLib where it is defined
	it.each([
		{
			name: 'northern',
			from: { latitudeDeg: 46.25, longitudeDeg: -28.75 },
			to: { latitudeDeg: 46.27, longitudeDeg: -28.7 }
		},
		{
			name: 'southern',
			from: { latitudeDeg: -33.1, longitudeDeg: 0.001 },
			to: { latitudeDeg: -33.15, longitudeDeg: -0.02 }
		},
		{
			name: 'antimeridian',
			from: { latitudeDeg: 5, longitudeDeg: 179.99 },
			to: { latitudeDeg: 5.02, longitudeDeg: -179.98 }
		}
	])('puts points where the other frame has them ($name)', ({ from, to }) => {
		const latitudes = [-0.03, -0.01, 0, 0.02].map((d) => from.latitudeDeg + d);
		const longitudes = [0.02, -0.03, 0.01, 0].map((d) => from.longitudeDeg + d);
		const before = toLocalMetres(latitudes, longitudes, from);
		const expected = toLocalMetres(latitudes, longitudes, to);
		const moved = changeFrame(before.xM, before.yM, from, to);
		for (let i = 0; i < 4; i++) {
			expect(moved.xM[i]).toBeCloseTo(expected.xM[i], 5);
			expect(moved.yM[i]).toBeCloseTo(expected.yM[i], 5);
		}
	});

	it('keeps what is missing missing', () => {
		const frame = { latitudeDeg: 10, longitudeDeg: 20 };
		const moved = changeFrame(Float64Array.of(NaN), Float64Array.of(NaN), frame, { ...frame, latitudeDeg: 10.1 });
		expect(moved.xM[0]).toBeNaN();
	});
});
