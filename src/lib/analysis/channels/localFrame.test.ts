import fc from 'fast-check';
import geodesic from 'geographiclib-geodesic';
import { describe, expect, it } from 'vitest';
import { middleOf, toLocalMetres, wrapDegrees } from './localFrame.ts';

const wgs84 = geodesic.Geodesic.WGS84;

describe('toLocalMetres', () => {
	it('stands on a library that gives the published inverse solution', () => {
		// Wellington – Salamanca, the worked example of the GeographicLib documentation (Karney 2013): 19 959 679.267 m.
		expect(wgs84.Inverse(-41.32, 174.81, 40.96, -5.5).s12).toBeCloseTo(19_959_679.267, 3);
	});

	it.each([
		// Length of a degree on WGS84 (NIMA TR8350.2 formulae, as tabled in handbooks): latitude, m per ° north, m per ° east.
		{ latitudeDeg: 0, northM: 110_574, eastM: 111_320 },
		{ latitudeDeg: 15, northM: 110_649, eastM: 107_550 },
		{ latitudeDeg: 30, northM: 110_852, eastM: 96_486 },
		{ latitudeDeg: 45, northM: 111_132, eastM: 78_847 },
		{ latitudeDeg: 60, northM: 111_412, eastM: 55_800 },
		{ latitudeDeg: 75, northM: 111_618, eastM: 28_902 }
	])('has the tabled length of a degree at $latitudeDeg°', ({ latitudeDeg, northM, eastM }) => {
		const origin = { latitudeDeg, longitudeDeg: 12 };
		const { xM, yM } = toLocalMetres([latitudeDeg + 0.005, latitudeDeg - 0.005, latitudeDeg], [12, 12, 12.01], origin);
		expect((yM[0] - yM[1]) * 100).toBeCloseTo(northM, -0.5);
		expect(xM[2] * 100).toBeCloseTo(eastM, -0.5);
	});

	it('keeps lengths to 1e-5 and angles to 1e-4 rad within 10 km, anywhere between 80° south and north', () => {
		let [worstLength, worstAngle] = [0, 0];
		const place = fc.record({
			turn: fc.double({ min: 0, max: 360, noNaN: true }),
			wayM: fc.double({ min: 50, max: 10_000, noNaN: true })
		});
		fc.assert(
			fc.property(
				fc.double({ min: -80, max: 80, noNaN: true }),
				fc.double({ min: -180, max: 180, noNaN: true }),
				place,
				place,
				(latitudeDeg, longitudeDeg, a, b) => {
					const origin = { latitudeDeg, longitudeDeg };
					const points = [a, b].map(({ turn, wayM }) => wgs84.Direct(latitudeDeg, longitudeDeg, turn, wayM));
					const latitudes = points.map(({ lat2 }) => lat2 ?? NaN);
					const longitudes = points.map(({ lon2 }) => lon2 ?? NaN);
					const { xM, yM } = toLocalMetres(latitudes, longitudes, origin);
					const between = wgs84.Inverse(latitudes[0], longitudes[0], latitudes[1], longitudes[1]).s12 ?? NaN;
					const flat = Math.hypot(xM[0] - xM[1], yM[0] - yM[1]);
					if (between > 50) worstLength = Math.max(worstLength, Math.abs(flat / between - 1));
					const azimuths = [0, 1].map((i) => (Math.atan2(xM[i], yM[i]) * 180) / Math.PI);
					[a, b].forEach(({ turn }, i) => {
						worstAngle = Math.max(worstAngle, (Math.abs(wrapDegrees(azimuths[i] - turn)) * Math.PI) / 180);
					});
				}
			),
			{ numRuns: 400, seed: 1 }
		);
		expect(worstLength).toBeLessThan(1e-5);
		expect(worstAngle).toBeLessThan(1e-4);
	});

	it('crosses the antimeridian without a jump', () => {
		const [latitudes, longitudes] = [
			[10, 10, 10],
			[179.9995, -179.9995, 180]
		];
		const origin = middleOf(latitudes, longitudes);
		expect(Math.abs(wrapDegrees((origin?.longitudeDeg ?? 0) - 180))).toBeLessThan(1e-9);
		const { xM } = toLocalMetres(latitudes, longitudes, { latitudeDeg: 10, longitudeDeg: 180 });
		expect(xM[1] - xM[0]).toBeCloseTo(109.6, 0);
		expect(xM[2]).toBeCloseTo(0, 6);
	});

	it('leaves missing positions missing', () => {
		const { xM, yM } = toLocalMetres([NaN, 1], [2, NaN], { latitudeDeg: 1, longitudeDeg: 2 });
		expect([xM[1], yM[0]]).toEqual([NaN, NaN]);
		expect(middleOf([NaN], [NaN])).toBeNull();
	});
});
