/** An invented recording that tests write in many ways: 10 Hz, an out lap's half, three complete laps, an in lap's half. */

export interface Sample {
	timeS: number;
	lap: number;
	/** m from the first sample */
	distanceM: number;
	/** m from the line */
	lapDistanceM: number;
	speedKmh: number;
	throttlePct: number;
	brakePct: number;
	steeringDeg: number;
	gear: number;
	latitude: number;
	longitude: number;
	/** g, gaining speed positive */
	accLongG: number;
	accLatG: number;
}

const LAP_M = 640;
const STEP_S = 0.1;
const METRES_PER_DEGREE = 111_195;
const CENTRE = { latitude: 47.31, longitude: 8.42 };

/** Speed along the lap, m/s: two straights and two corners of different kind. */
function speedAt(s: number): number {
	const turn = (2 * Math.PI * s) / LAP_M;
	return 16 + 6 * Math.cos(2 * turn) + 2 * Math.cos(turn + 1);
}

/** An oval, driven to the left. */
function place(s: number): { latitude: number; longitude: number } {
	const turn = (2 * Math.PI * s) / LAP_M;
	const [east, north] = [125 * Math.cos(turn), 75 * Math.sin(turn)];
	return {
		latitude: CENTRE.latitude + north / METRES_PER_DEGREE,
		longitude: CENTRE.longitude + east / (METRES_PER_DEGREE * Math.cos((CENTRE.latitude * Math.PI) / 180))
	};
}

/** The samples, the same at each call; values as a logger would round them. */
export function testRecording(): Sample[] {
	const samples: Sample[] = [];
	let way = LAP_M / 2;
	for (let i = 0; way < 4.5 * LAP_M; i++) {
		const speed = speedAt(way);
		const gain = ((speedAt(way + 0.5) - speedAt(way - 0.5)) * speed) / 9.80665;
		samples.push({
			timeS: round(i * STEP_S, 3),
			lap: Math.floor(way / LAP_M),
			distanceM: round(way - LAP_M / 2, 2),
			lapDistanceM: round(way % LAP_M, 2),
			speedKmh: round(speed * 3.6, 2),
			throttlePct: round(Math.min(100, Math.max(0, gain * 200)), 1),
			brakePct: round(Math.min(100, Math.max(0, -gain * 180)), 1),
			steeringDeg: round(
				60 - 40 * Math.cos((4 * Math.PI * way) / LAP_M) - 70 * Math.max(0, Math.cos((2 * Math.PI * way) / LAP_M)),
				1
			),
			gear: 1 + Math.floor((speed - 8) / 4),
			latitude: round(place(way).latitude, 7),
			longitude: round(place(way).longitude, 7),
			accLongG: round(gain, 3),
			accLatG: round((speed * speed) / 100 / 9.80665, 3)
		});
		// Two half steps: the way is that of the speeds within a centimetre.
		way += speedAt(way + (speed * STEP_S) / 2) * STEP_S;
	}
	return samples;
}

function round(value: number, places: number): number {
	return Number(value.toFixed(places));
}
