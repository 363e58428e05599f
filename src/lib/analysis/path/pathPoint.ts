import type { PathGeometry } from './pathGeometry.ts';

/** Every how many points the whole path is searched at. */
const SEARCH_STRIDE = 8;
/** Cosine from which on a course runs along the path. */
const ALONG_COS = 0.5;

/** A point that moves along a path: positions are dropped on the path near it. One is kept per run, so that nothing is allocated per sample. */
export class PathPoint {
	/** 0 … lengthM */
	placeM = 0;
	/** left of the path positive */
	offsetM = NaN;
	/** times that the last move went over the end (+) or the start (−) of a closed path */
	turns = 0;
	private span = 0;
	private x = 0;
	private y = 0;
	private readonly path: PathGeometry;
	private readonly spans: number;

	constructor(path: PathGeometry) {
		this.path = path;
		this.spans = path.placeM.length - 1;
	}

	/** Goes to a place, which may lie beyond the ends of a closed path. */
	moveTo(placeM: number): void {
		const { placeM: places, lengthM, closed } = this.path;
		this.turns = closed ? Math.floor(placeM / lengthM) : 0;
		const wrapped = placeM - this.turns * lengthM;
		let span = Math.max(0, Math.min(this.spans - 1, Math.floor((wrapped / lengthM) * this.spans)));
		while (span > 0 && places[span] > wrapped) span--;
		while (span < this.spans - 1 && places[span + 1] <= wrapped) span++;
		this.span = span;
	}

	/**
	 * Drops a position on the path within a reach of where the point is.
	 *
	 * @returns false where it has no foot there; beyond the ends of an open path the place goes on straight
	 */
	settle(x: number, y: number, reachM: number): boolean {
		const { closed, lengthM } = this.path;
		this.x = x;
		this.y = y;
		let span = this.span;
		let turns = this.turns;
		let left = Math.ceil((reachM * this.spans) / lengthM) + 2;
		let here = this.ahead(span);
		let next = this.ahead(span + 1);
		while (next >= 0) {
			if (span === this.spans - 1) {
				if (!closed) break;
				span = -1;
				turns++;
			}
			span++;
			here = next;
			next = this.ahead(span + 1);
			if (--left < 0) return false;
		}
		while (here < 0) {
			if (span === 0) {
				if (!closed) break;
				span = this.spans;
				turns--;
			}
			span--;
			next = here;
			here = this.ahead(span);
			if (--left < 0) return false;
		}
		this.span = span;
		this.turns = turns;
		this.drop(here, next);
		return true;
	}

	/**
	 * Searches the whole path for the nearest place along which a course runs, or against which where none is near.
	 *
	 * @param nearM a place along the course counts as that much nearer than one against it
	 * @returns cosine between course and path there; `offsetM` is NaN where nothing is near
	 */
	search(x: number, y: number, courseRad: number, nearM: number): number {
		const { xM, yM, alongX, alongY, lengthM } = this.path;
		const ux = Math.cos(courseRad);
		const uy = Math.sin(courseRad);
		let best = Infinity;
		let bestAt = 0;
		for (let i = 0; i < this.spans; i += SEARCH_STRIDE) {
			const dx = x - xM[i];
			const dy = y - yM[i];
			const cos = ux * alongX[i] + uy * alongY[i];
			const size = dx * dx + dy * dy + (cos > ALONG_COS ? 0 : nearM * nearM);
			if (size < best) {
				best = size;
				bestAt = i;
			}
		}
		this.span = bestAt;
		this.turns = 0;
		this.offsetM = NaN;
		if (!this.settle(x, y, (2 * SEARCH_STRIDE * lengthM) / this.spans)) return 0;
		this.turns = 0;
		return ux * alongX[this.span] + uy * alongY[this.span];
	}

	/** Metres by which the position lies ahead of a point of the path. */
	private ahead(i: number): number {
		const path = this.path;
		return (this.x - path.xM[i]) * path.alongX[i] + (this.y - path.yM[i]) * path.alongY[i];
	}

	/** Place and offset between the ends of the span, from how far the position lies ahead of each. */
	private drop(here: number, next: number): void {
		const { placeM: places, xM, yM, alongX, alongY, curvaturePerM } = this.path;
		const span = this.span;
		const length = places[span + 1] - places[span];
		const share = here / (here - next);
		this.placeM = places[span] + share * length;
		const x = xM[span] + share * (xM[span + 1] - xM[span]);
		const y = yM[span] + share * (yM[span + 1] - yM[span]);
		const ux = alongX[span] + share * (alongX[span + 1] - alongX[span]);
		const uy = alongY[span] + share * (alongY[span + 1] - alongY[span]);
		// the arc lies outside of its chord
		const sagitta = (curvaturePerM[span] * length * length * share * (1 - share)) / 2;
		this.offsetM = ((this.y - y) * ux - (this.x - x) * uy) / Math.sqrt(ux * ux + uy * uy) + sagitta;
	}
}
