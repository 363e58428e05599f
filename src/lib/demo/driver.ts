/** What a person does differently from the plan in one corner; keys are corner names. */
export interface Habit {
	/** brakes this much before the place that the speed asks for */
	brakesEarlierM?: number;
	/** presses the pedal this far, whatever the stop needs */
	peakPct?: number;
	/** is this much slower at the slowest point than the tyres allow */
	slowerKmh?: number;
	/** waits this much longer for the throttle */
	picksUpLaterM?: number;
}

export interface DemoDriver {
	name: string;
	seed: number;
	/** share of the tyres' cornering that is used, 0–1 */
	skill: number;
	/** share of the braking distance over which the pedal comes back */
	releaseShare: number;
	/** shape of the release: 1 is straight, above 1 lets go early and trails */
	releaseShape: number;
	widthM: number;
	/** turns in this much later than the calmest line, m */
	lateM: number;
	/** how much the person varies from lap to lap; 1 is a steady amateur */
	spread: number;
	habits: Record<string, Habit>;
}

export const RHEA: DemoDriver = {
	name: 'Rhea Calloway',
	seed: 11,
	skill: 0.99,
	releaseShare: 0.44,
	releaseShape: 1,
	widthM: 3.6,
	lateM: 2,
	spread: 0.45,
	habits: {}
};

/** Three habits: brakes early and hard for the slow corners, over-slows the long ones, waits at the exit. */
export const MIRA: DemoDriver = {
	name: 'Mira Tansley',
	seed: 23,
	skill: 0.982,
	releaseShare: 0.5,
	releaseShape: 1,
	widthM: 3.2,
	lateM: -2,
	spread: 1,
	habits: {
		'Tern Hairpin': { brakesEarlierM: 12, peakPct: 96 },
		'Long Meadow': { slowerKmh: 3.2 },
		'Lime Kiln': { picksUpLaterM: 9 },
		'Old Barn': { brakesEarlierM: 9 },
		Millrace: { slowerKmh: 2.4, picksUpLaterM: 5 },
		Gatehouse: { peakPct: 88, picksUpLaterM: 6 },
		'Long Bank': { slowerKmh: 1.5 },
		Crossbar: { brakesEarlierM: 8 }
	}
};

export const JONAS: DemoDriver = {
	name: 'Jonas Velde',
	seed: 37,
	skill: 0.984,
	releaseShare: 0.46,
	releaseShape: 0.95,
	widthM: 3.4,
	lateM: -1,
	spread: 0.8,
	habits: { Fernside: { brakesEarlierM: 7 }, Weir: { picksUpLaterM: 6 }, Heron: { slowerKmh: 2.5 } }
};

export const TOMAS: DemoDriver = {
	name: 'Tomas Ruud',
	seed: 41,
	skill: 0.978,
	releaseShare: 0.52,
	releaseShape: 1.1,
	widthM: 3,
	lateM: 0.5,
	spread: 1.3,
	habits: { 'Lime Kiln': { brakesEarlierM: 10 }, Orchard: { slowerKmh: 3 }, Gatehouse: { picksUpLaterM: 7 } }
};
