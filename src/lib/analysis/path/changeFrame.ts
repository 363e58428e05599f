import { RAD_PER_DEG } from '../../units.ts';

/** WGS84 semi-major axis, m, and first eccentricity squared (NIMA TR8350.2). */
const SEMI_MAJOR_M = 6_378_137;
const FLATTENING = 1 / 298.257223563;
const ECCENTRICITY_SQUARED = FLATTENING * (2 - FLATTENING);

export interface Frame {
	latitudeDeg: number;
	longitudeDeg: number;
}

/** Earth-centred position of an origin and the directions east, north and up there, in the meridian plane of `turn` = 0. */
interface Tangent {
	x: number;
	y: number;
	z: number;
	sinLatitude: number;
	cosLatitude: number;
	sinTurn: number;
	cosTurn: number;
}

/**
 * Takes local metres about one origin to local metres about another, over the ellipsoid: each point of the first tangent plane
 * is dropped on WGS84 along the plane's upright and projected on the second plane, so that two runs of one circuit, each about
 * its own middle, lie on each other to the micrometre.
 *
 * @param xM, yM east and north of `from`; NaN stays NaN
 * @returns new columns, east and north of `to`
 */
export function changeFrame(
	xM: Float64Array,
	yM: Float64Array,
	from: Frame,
	to: Frame
): { xM: Float64Array; yM: Float64Array } {
	const a = tangentAt(from, from.longitudeDeg);
	const b = tangentAt(to, from.longitudeDeg);
	const outX = new Float64Array(xM.length);
	const outY = new Float64Array(xM.length);
	for (let i = 0; i < xM.length; i++) {
		const east = xM[i];
		const north = yM[i];
		let up = -(east * east + north * north) / (2 * SEMI_MAJOR_M);
		let x = 0;
		let y = 0;
		let z = 0;
		// the height at which the upright through the point meets the ellipsoid x²/a² + y²/a² + z²/b² = 1, by Newton
		for (let pass = 0; pass < 3; pass++) {
			const outward = up * a.cosLatitude - north * a.sinLatitude;
			x = a.x + outward;
			y = east;
			z = a.z + up * a.sinLatitude + north * a.cosLatitude;
			const flat = 1 - ECCENTRICITY_SQUARED;
			const excess = x * x + y * y + (z * z) / flat - SEMI_MAJOR_M * SEMI_MAJOR_M;
			const slope = 2 * (x * a.cosLatitude + (z * a.sinLatitude) / flat);
			up -= excess / slope;
		}
		const dx = x - b.x;
		const dy = y - b.y;
		const dz = z - b.z;
		outX[i] = -dx * b.sinTurn + dy * b.cosTurn;
		outY[i] = dz * b.cosLatitude - (dx * b.cosTurn + dy * b.sinTurn) * b.sinLatitude;
	}
	return { xM: outX, yM: outY };
}

function tangentAt({ latitudeDeg, longitudeDeg }: Frame, meridianDeg: number): Tangent {
	const latitude = latitudeDeg * RAD_PER_DEG;
	const turn = (longitudeDeg - meridianDeg) * RAD_PER_DEG;
	const sinLatitude = Math.sin(latitude);
	const cosLatitude = Math.cos(latitude);
	const radius = SEMI_MAJOR_M / Math.sqrt(1 - ECCENTRICITY_SQUARED * sinLatitude * sinLatitude);
	const axis = radius * cosLatitude;
	return {
		x: axis * Math.cos(turn),
		y: axis * Math.sin(turn),
		z: radius * (1 - ECCENTRICITY_SQUARED) * sinLatitude,
		sinLatitude,
		cosLatitude,
		sinTurn: Math.sin(turn),
		cosTurn: Math.cos(turn)
	};
}
