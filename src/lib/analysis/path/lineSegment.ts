/** A start/finish line as a person gives it: two points on WGS84, one on each side of the track. */
export interface LineSegment {
	latitudeA: number;
	longitudeA: number;
	latitudeB: number;
	longitudeB: number;
}
