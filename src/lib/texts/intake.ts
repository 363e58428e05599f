import type { IntakeAnswers } from '../schemas/intake.ts';

/** Answers of the intake, as the form and the sheet say them. */
export const INTAKE_TEXT = {
	place: { simulator: 'simulator', circuit: 'circuit', both: 'both', unsaid: 'not said' },
	experience: {
		'first-season': 'first season',
		'some-seasons': 'a few seasons',
		races: 'races regularly',
		long: 'ten years and more',
		unsaid: 'not said'
	},
	brakePedal: {
		force: 'reads force',
		travel: 'reads travel',
		hydraulic: 'hydraulic, in a rig',
		car: 'the car’s own',
		unsaid: 'not said'
	},
	brakeCurve: { linear: 'linear', bent: 'bent by a curve', unsaid: 'not said' },
	wheel: { direct: 'direct drive', belt: 'belt', gear: 'gears', car: 'the car’s own', unsaid: 'not said' },
	view: {
		'three-screens': 'three screens',
		'one-screen': 'one screen',
		headset: 'headset',
		car: 'the car’s own',
		unsaid: 'not said'
	},
	drivingLine: { never: 'never', corners: 'in corners', always: 'always', unsaid: 'not said' },
	aids: {
		brakes: 'anti-lock brakes',
		traction: 'traction control',
		stability: 'stability control',
		gears: 'automatic gears',
		steering: 'steering help'
	}
} as const;

/** Files with fewer samples a second place a brake point within metres, not within one. */
const ENOUGH_HZ = 50;

/**
 * What common practice says to the answers (no source beyond practice): learn without a drawn line, a linear brake, a pedal that
 * reads force, a logger that is quick enough. Only what the answers give reason for.
 */
export function intakeAdvice(answers: IntakeAnswers): string[] {
	const { place, drivingLine, brakeCurve, brakePedal, sampleRateHz, aids } = answers;
	const isRig = place === 'simulator' || place === 'both';
	return [
		...(drivingLine === 'always' || drivingLine === 'corners'
			? [
					'Learn without the drawn line: it teaches to look at the line instead of the place where you brake. Switch it off, and choose a mark beside the track for each braking zone.'
				]
			: []),
		...(isRig && brakeCurve === 'bent'
			? [
					'Set the rig’s brake to linear: half the force gives half the braking, anywhere in the travel, so that the foot learns one scale. The pedal check measures it.'
				]
			: []),
		...(isRig && brakePedal === 'travel'
			? [
					'A pedal that reads travel asks for a finer foot than one that reads force. Learn the release first: it matters more than the peak.'
				]
			: []),
		...(aids.includes('stability') || aids.includes('steering')
			? [
					'Stability control and steering help hide what the car does at the limit. Where the rules and your safety allow, learn a corner without them on a simulator first.'
				]
			: []),
		...(sampleRateHz !== null && sampleRateHz < ENOUGH_HZ
			? [
					`At ${sampleRateHz} samples a second a brake point is known within a few metres only. Set the logger to ${ENOUGH_HZ} or more, where it can.`
				]
			: [])
	];
}
