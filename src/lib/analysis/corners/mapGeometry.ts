import type { Corner } from '../../schemas/analysisDocument.ts';
import type { MapPath } from './editCornerMap.ts';

/** Way in driving direction from one place to another, m: on a closed path below one lap; on an open one negative where it lies behind. */
export function forwardM(fromM: number, toM: number, { lengthM, closed }: Pick<MapPath, 'lengthM' | 'closed'>): number {
	const way = toM - fromM;
	return closed ? way - Math.floor(way / lengthM) * lengthM : way;
}

/**
 * Hand, angle and tightest radius of a stretch, from the path's curvature.
 *
 * @param fallback what stands where the path has no shape
 */
export function shapeBetween(
	startM: number,
	endM: number,
	path: MapPath,
	fallback: Pick<Corner, 'direction' | 'minRadiusM' | 'angleDeg'>
): Pick<Corner, 'direction' | 'minRadiusM' | 'angleDeg'> {
	let turned = 0;
	let tightest = 0;
	for (const curvature of curvatures(startM, endM, path)) {
		if (Number.isNaN(curvature)) {
			const { direction, minRadiusM, angleDeg } = fallback;
			return { direction, minRadiusM, angleDeg };
		}
		turned += curvature;
		tightest = Math.max(tightest, Math.abs(curvature));
	}
	return {
		direction: turned === 0 ? fallback.direction : turned > 0 ? 'left' : 'right',
		minRadiusM: tightest > 0 ? 1 / tightest : null,
		angleDeg: (Math.abs(turned) * 180) / Math.PI
	};
}

/** Place of the tightest curvature of a stretch; its middle where the path has no shape. */
export function tightestPlace(startM: number, endM: number, path: MapPath): number {
	const along = curvatures(startM, endM, path);
	let best = -1;
	along.forEach((curvature, i) => {
		if (Math.abs(curvature) > (best < 0 ? 0 : Math.abs(along[best]))) best = i;
	});
	const way = best < 0 ? forwardM(startM, endM, path) / 2 : best + 0.5;
	const place = startM + way;
	return path.closed ? place - Math.floor(place / path.lengthM) * path.lengthM : place;
}

/** Seconds that the path's own lap takes from one place to another; infinite where its speed is not known. */
export function secondsBetween(fromM: number, toM: number, path: MapPath): number {
	const { speedKmh } = path;
	let seconds = 0;
	const way = forwardM(fromM, toM, path);
	for (let i = 0; i < way; i++) {
		const speed = speedKmh[Math.floor(fromM + i) % speedKmh.length];
		if (!(speed > 0)) return Infinity;
		seconds += (3.6 / speed) * Math.min(1, way - i);
	}
	return seconds;
}

/** Curvature at each metre from a place on. */
function curvatures(startM: number, endM: number, path: MapPath): number[] {
	const { curvaturePerM } = path;
	return Array.from(
		{ length: Math.max(1, Math.round(forwardM(startM, endM, path))) },
		(_, i) => curvaturePerM[Math.min(Math.floor(startM + i + 0.5), 1e9) % curvaturePerM.length]
	);
}
