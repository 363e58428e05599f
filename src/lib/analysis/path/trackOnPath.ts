import { KMH_PER_MPS } from '../../units.ts';
import { wayBetween } from '../laps/wayBetween.ts';
import type { Channels } from '../model.ts';
import type { Positions } from './freshPositions.ts';
import type { PathGeometry } from './pathGeometry.ts';
import { PathPoint } from './pathPoint.ts';

/** Where each position lies on a path. */
export interface Tracked {
	/** unwrapped place, one entry per position; NaN where the car is not on the path */
	placeM: Float64Array;
	/** left of the path positive */
	offsetM: Float64Array;
	/** share of the driven way that was found on the path, 0 … 1 */
	onPath: number;
	/** the run follows the path, but the other way round */
	reversed: boolean;
}

/** A position is on the path up to this distance from it: run-off, pit lane beside the straight. */
const LARGEST_OFFSET_M = 60;
/** A position that has been lost is found again within this distance. */
const FOUND_OFFSET_M = 30;
/** Step along the path against the driven way: slack, and share of the way. */
const STEP_SLACK_M = 10;
const STEP_SHARE = 0.6;
/** After this time without a place the whole path is searched. */
const SEARCH_AFTER_S = 1;
/** The driven way over a longer gap says too little about where the car is. */
const LONGEST_STEP_S = 4;
/** So many positions near the path say which way round the run goes. */
const ENOUGH_TRIES = 15;
/** Slower than this a car has no course to search by. */
const COURSE_KMH = 15;
/** Cosine that the course must have with the path's direction. */
const ALONG_COS = 0.5;

/**
 * Follows a run along a path: each position is dropped on it square to its direction, near where the driven way since the last one
 * leads, so that neighbouring stretches, crossings and hairpins are not mixed up. Between two points of the path the direction
 * turns evenly, which makes places continuous. Where the car leaves the path its place is unknown until it is back.
 *
 * O(positions); the whole path is searched only at the start and after leaving it.
 */
export function trackOnPath(positions: Positions, channels: Channels, path: PathGeometry): Tracked {
	const { sample, xM, yM } = positions;
	const { timeS, speedKmh } = channels;
	const n = sample.length;
	const placeM = new Float64Array(n).fill(NaN);
	const offsetM = new Float64Array(n).fill(NaN);
	const at = new PathPoint(path);
	const start = firstOnPath();
	if (start.index < 0) return { placeM, offsetM, onPath: 0, reversed: start.against > 0 };
	const onward = follow(start.index, 1);
	const back = follow(start.index, -1);
	const driven = onward.driven + back.driven;
	const onPath = driven > 0 ? (onward.found + back.found) / driven : 1;
	return { placeM, offsetM, onPath, reversed: start.against > start.along };

	/** Way between two neighbouring positions. */
	function wayTo(j: number): number {
		const from = sample[j - 1];
		const to = sample[j];
		if (to > from + 1) return wayBetween(channels, from, to);
		const way = ((speedKmh[from] + speedKmh[to]) / (2 * KMH_PER_MPS)) * (timeS[to] - timeS[from]);
		return way >= 0 ? way : wayBetween(channels, from, to);
	}

	/** First position from which the path can be followed, and how many before it ran along or against it. */
	function firstOnPath(): { index: number; along: number; against: number } {
		let along = 0;
		let against = 0;
		let index = -1;
		let triedS = -Infinity;
		for (let j = 0; j < n - 1; j++) {
			if (timeS[sample[j]] < triedS + SEARCH_AFTER_S || !(speedKmh[sample[j]] > COURSE_KMH)) continue;
			triedS = timeS[sample[j]];
			const cos = at.search(xM[j], yM[j], course(j), FOUND_OFFSET_M);
			if (!(Math.abs(at.offsetM) < FOUND_OFFSET_M)) continue;
			if (cos > ALONG_COS) along++;
			else if (cos < -ALONG_COS) against++;
			if (index < 0 && cos > ALONG_COS) index = j;
			if (along + against >= ENOUGH_TRIES) break;
		}
		return { index: along > against ? index : -1, along, against };
	}

	/** Direction of travel around a position, from a chord that noise cannot turn. */
	function course(j: number): number {
		const reach = Math.max(3, 12 * positions.noiseM);
		let high = j;
		while (high < n - 1 && high < j + 100 && Math.hypot(xM[high] - xM[j], yM[high] - yM[j]) < reach) high++;
		let low = j;
		if (high === n - 1) while (low > 0 && Math.hypot(xM[high] - xM[low], yM[high] - yM[low]) < reach) low--;
		return Math.atan2(yM[high] - yM[low], xM[high] - xM[low]);
	}

	/** Follows the path from a position to the end or the start of the run; returns the way driven and the way found on the path. */
	function follow(from: number, direction: 1 | -1): { driven: number; found: number } {
		let driven = 0;
		let found = 0;
		at.search(xM[from], yM[from], course(from), FOUND_OFFSET_M);
		let place = at.placeM;
		let turns = 0;
		placeM[from] = place;
		offsetM[from] = at.offsetM;
		let last = from;
		let expected = place;
		let afterGap = false;
		for (let j = from + direction; j >= 0 && j < n; j += direction) {
			const before = direction > 0 ? j - 1 : j;
			const way = wayTo(before + 1);
			const stepS = timeS[sample[before + 1]] - timeS[sample[before]];
			if (stepS < LONGEST_STEP_S) {
				expected += direction * way;
				driven += way;
			} else {
				expected = place;
				afterGap = true;
			}
			const lostS = Math.abs(timeS[sample[j]] - timeS[sample[last]]);
			if (lostS < SEARCH_AFTER_S + stepS && stepS < LONGEST_STEP_S) {
				at.moveTo(expected - turns * path.lengthM);
				const reach = STEP_SLACK_M + STEP_SHARE * Math.abs(expected - place);
				if (at.settle(xM[j], yM[j], reach) && Math.abs(at.offsetM) <= LARGEST_OFFSET_M) {
					const dropped = at.placeM + (turns + at.turns) * path.lengthM;
					if (Math.abs(dropped - expected) <= reach) {
						turns += at.turns;
						place = dropped;
						expected = dropped;
						placeM[j] = place;
						offsetM[j] = at.offsetM;
						last = j;
						if (Math.abs(at.offsetM) < FOUND_OFFSET_M) found += way;
					}
				}
				continue;
			}
			if (!(speedKmh[sample[j]] > COURSE_KMH)) continue;
			const cos = at.search(xM[j], yM[j], course(j), FOUND_OFFSET_M);
			if (!(cos > ALONG_COS && Math.abs(at.offsetM) < FOUND_OFFSET_M)) continue;
			turns = turnsTo(at.placeM, place, expected, afterGap, direction);
			afterGap = false;
			place = at.placeM + turns * path.lengthM;
			expected = place;
			placeM[j] = place;
			offsetM[j] = at.offsetM;
			last = j;
		}
		return { driven, found };
	}

	/**
	 * Whole turns to add to a place where the path is met again: those that the driven way says; behind a gap in the recording, which
	 * says nothing about the way, as few as lie ahead.
	 */
	function turnsTo(found: number, lastPlace: number, expected: number, afterGap: boolean, direction: 1 | -1): number {
		if (!path.closed) return 0;
		if (!afterGap) return Math.round((expected - found) / path.lengthM);
		const ahead = (lastPlace - direction * STEP_SLACK_M - found) / path.lengthM;
		return direction > 0 ? Math.ceil(ahead) : Math.floor(ahead);
	}
}
