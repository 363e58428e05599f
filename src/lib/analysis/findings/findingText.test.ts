import { describe, expect, it } from 'vitest';
import type { Evidence } from '../../schemas/analysisDocument.ts';
import { findingCodeSchema, type FindingCode } from '../../schemas/codes.ts';
import { findingParts, findingText } from './findingText.ts';

const evidence = (
	quantity: string,
	unit: string,
	driver: number | null,
	reference: number | null,
	atM: number | null = null
): Evidence => ({ quantity, unit, driver, reference, atM, plusMinus: null });

const CASES: { code: FindingCode; evidence: Evidence[]; text: string }[] = [
	{
		code: 'brake_early',
		evidence: [evidence('onset', 'm', 412.2, 424.1, 412.2)],
		text: 'Brakes 12 m early: at 412 m, not 424 m.'
	},
	{
		code: 'brake_early',
		evidence: [evidence('lift', 'm', 412.2, 424.1, 412.2)],
		text: 'Lifts 12 m early: at 412 m, not 424 m.'
	},
	{
		code: 'brake_early',
		evidence: [evidence('onset', 'm', 412.2, null, 412.2)],
		text: 'Brakes at 412 m, where the reference does not brake.'
	},
	{
		code: 'brake_late',
		evidence: [evidence('onset', 'm', 425.3, 424.1, 425.3)],
		text: 'Brakes 1.2 m late: at 425.3 m, not 424.1 m.'
	},
	{
		code: 'peak_over',
		evidence: [evidence('peak', '%', 96, 71, 430), evidence('deceleration', 'm/s²', 9.5, 9.5, 430)],
		text: 'Peaks at 96 %, not 71 %, yet slows no harder: it brings nothing more.'
	},
	{ code: 'peak_over', evidence: [evidence('peak', '%', 96, 71, 430)], text: 'Peaks at 96 %, not 71 %.' },
	{
		code: 'peak_under',
		evidence: [
			evidence('peak', '%', 72, 95, 430),
			evidence('deceleration', 'm/s²', 7.24, 9.52, 430),
			evidence('onset', 'm', 1180, 1209, 1180)
		],
		text: 'Peaks at 72 %, not 95 %: slows down with 7.2 m/s², not 9.5 m/s², and so brakes 29 m early, at 1180 m, not 1209 m.'
	},
	{
		code: 'rise_quick',
		evidence: [evidence('rise', 's', 0.08, 0.25)],
		text: 'Reaches the peak in 0.08 s, not 0.25 s.'
	},
	{ code: 'second_dab', evidence: [evidence('dabs', '', 2, 0)], text: 'Further dabs on the brake: 2, not 0.' },
	{
		code: 'release_abrupt',
		evidence: [evidence('release', 's', 0.3, 0.9)],
		text: 'Lets the brake go within 0.3 s, not 0.9 s.'
	},
	{
		code: 'release_long',
		evidence: [evidence('release', 's', 1.3, 0.9), evidence('releaseEnd', 'm', 512, 505, 512)],
		text: 'Lets the brake go over 1.3 s, not 0.9 s; off it at 512 m, not 505 m.'
	},
	{
		code: 'hold_missing',
		evidence: [evidence('lightHold', 's', null, 0.6)],
		text: 'No light hold of the brake, where the reference holds it for 0.6 s.'
	},
	{
		code: 'hold_missing',
		evidence: [evidence('lightHold', 's', 0.2, 0.6)],
		text: 'Holds the brake lightly for 0.2 s, not 0.6 s.'
	},
	{
		code: 'min_speed_low',
		evidence: [evidence('minSpeed', 'km/h', 77, 81, 1744), evidence('releaseEnd', 'm', 512, 505, 512)],
		text: 'Slowest at 77 km/h, not 81 km/h; off the brake at 512 m, not 505 m.'
	},
	{
		code: 'entry_fast',
		evidence: [evidence('entrySpeed', 'km/h', 112, 107, 400), evidence('pickUp', 'm', 470, 461, 470)],
		text: 'Arrives at 112 km/h, not 107 km/h; on the throttle at 470 m, not 461 m.'
	},
	{
		code: 'pick_up_late',
		evidence: [evidence('pickUp', 'm', 532, 517, 532)],
		text: 'On the throttle 15 m late: at 532 m, not 517 m.'
	},
	{
		code: 'pick_up_late',
		evidence: [evidence('pickUp', 'm', 532, null, 532)],
		text: 'On the throttle at 532 m, where the reference never leaves it.'
	},
	{
		code: 'second_lift',
		evidence: [evidence('secondLift', 's', 0.6, 0)],
		text: 'Lifts again after the pick-up for 0.6 s, not 0.0 s.'
	},
	{
		code: 'coasting',
		evidence: [evidence('coasting', 's', 0.96, 0.16), evidence('lift', 'm', 1498, 1524, 1498)],
		text: 'Coasts 1.0 s, not 0.2 s: off the throttle at 1498 m, not 1524 m.'
	},
	{
		code: 'exit_speed_low',
		evidence: [evidence('exitSpeed', 'km/h', 96, 101, 520), evidence('fullThrottle', 'm', 590, 574, 590)],
		text: 'Leaves at 96 km/h, not 101 km/h; full throttle at 590 m, not 574 m.'
	},
	{
		code: 'idle_gap',
		evidence: [evidence('idleGap', 's', 1.2, 0)],
		text: 'Neither turns nor accelerates hard for 1.2 s, not 0.0 s, before the next corner of the chain.'
	},
	{ code: 'lock_up', evidence: [evidence('lockUps', '', 1, 0)], text: 'Lock-ups: 1, not 0. Check for a flat spot.' },
	{
		code: 'line',
		evidence: [evidence('radius', 'm', 31, 36, 510), evidence('offset', 'm', -2.1, 0, 510)],
		text: 'Takes a tighter line: turns a radius of 31 m, not 36 m, at 510 m.'
	},
	{
		code: 'grip_unused',
		evidence: [evidence('lateralAcceleration', 'm/s²', 8.1, 9, 510)],
		text: 'Corners with 8.1 m/s², not 9.0 m/s², at 510 m, on the same radius.'
	},
	{
		code: 'car_or_wind',
		evidence: [evidence('straightSpeed', 'km/h', 190, 196, 900)],
		text: 'Reaches 190 km/h, not 196 km/h, at the end of the straight, which arrival speed and full throttle do not explain: car, tow or wind.'
	},
	{
		code: 'carried_in',
		evidence: [evidence('fromCorner', '', 2, null, 640)],
		text: 'Carried in from corner 2.'
	},
	{ code: 'carried_in', evidence: [evidence('fromCorner', '', 0, null, 640)], text: 'Carried in from the run-up.' },
	{
		code: 'carried_in',
		evidence: [evidence('lineSpeed', 'km/h', 171, 176, 0)],
		text: 'Brought along from the lap before: crosses the line at 171 km/h, not 176 km/h.'
	},
	{
		code: 'harder_no_gain',
		evidence: [
			evidence('peak', '%', 92, 75),
			evidence('deceleration', 'm/s²', 9.5, 9.6),
			evidence('laps', '', 4, null)
		],
		text: 'Peaks at 92 %, not 75 % in 4 laps, and slows no harder: 9.5 m/s². The tyres, a system or the brakes give no more.'
	},
	{
		code: 'pedal_change_slow',
		evidence: [evidence('coastBefore', 's', 0.31, 0.12)],
		text: 'Takes 0.31 s, not 0.12 s, to change from throttle to brake.'
	},
	{
		code: 'pedal_overlap',
		evidence: [evidence('overlap', 's', 0.6, 0.1)],
		text: 'Both pedals pressed for 0.6 s, not 0.1 s.'
	},
	{
		code: 'release_uneven',
		evidence: [evidence('release', 's', 0.8, 0.9)],
		text: 'Lets the brake go unevenly, over 0.80 s, where the reference eases it off ever more gently.'
	},
	{
		code: 'hold_short',
		evidence: [evidence('lightHold', 's', 0.21, 0.6)],
		text: 'Holds the brake lightly for only 0.2 s, not 0.6 s.'
	},
	{
		code: 'hold_strong',
		evidence: [evidence('holdLevel', '%', 18, 7), evidence('lightHold', 's', 0, 0.6)],
		text: 'Holds the brake at 18 %, not 7 %, while turning, where the reference holds it lightly for 0.6 s.'
	},
	{
		code: 'pick_up_hesitant',
		evidence: [evidence('fullThrottle', 'm', 612, 590), evidence('exitSpeed', 'km/h', 96, 101)],
		text: 'Opens the throttle slowly: full at 612 m, not 590 m; leaves at 96 km/h, not 101 km/h.'
	},
	{
		code: 'lift_extra',
		evidence: [evidence('lift', 'm', 760, null), evidence('smallestOpening', '%', 40, null)],
		text: 'Lifts at 760 m, to 40 %, where the reference does not lift.'
	},
	{
		code: 'coasting',
		evidence: [
			evidence('coasting', 's', 0.9, 0.2),
			evidence('coastBefore', 's', 0.5, 0.1),
			evidence('coastAfter', 's', 0.4, 0.1)
		],
		text: 'Coasts 0.9 s, not 0.2 s; of it 0.5 s before the brake, 0.4 s after the brake.'
	},
	{
		code: 'exit_speed_low',
		evidence: [evidence('exitSpeed', 'km/h', 96, 101, 520), evidence('straight', 'm', 640, null)],
		text: 'Leaves at 96 km/h, not 101 km/h, before 640 m of straight.'
	},
	{
		code: 'wheelspin',
		evidence: [evidence('wheelspin', 's', 0.7, 0), evidence('exitSpeed', 'km/h', 96, 101)],
		text: 'Spins a wheel for 0.7 s, not 0.0 s; leaves at 96 km/h, not 101 km/h.'
	},
	{
		code: 'scrub',
		evidence: [evidence('steering', '°', 130, 95)],
		text: 'Steers 130 °, not 95 °, and turns no tighter. The front tyres scrub.'
	},
	{
		code: 'steering_corrections',
		evidence: [evidence('corrections', '', 3, 0)],
		text: 'Corrects the steering 3 times in the corner, not 0.'
	},
	{
		code: 'turn_in_early',
		evidence: [evidence('turnIn', 'm', 490, 502)],
		text: 'Turns in 12 m early: at 490 m, not 502 m.'
	},
	{
		code: 'turn_in_late',
		evidence: [evidence('turnIn', 'm', 514, 502)],
		text: 'Turns in 12 m late: at 514 m, not 502 m.'
	},
	{
		code: 'chain_exit_low',
		evidence: [
			evidence('chainFound', 's', 0.08, null),
			evidence('chainLost', 's', 0.21, null),
			evidence('fromCorner', '', 3, null)
		],
		text: 'Finds 0.1 s in the linked corners from 3 on, and loses 0.2 s out of the last one.'
	},
	{
		code: 'lock_up',
		evidence: [evidence('lockUps', '', 1, 0), evidence('lock_fl', '', 1, null), evidence('lock_fr', '', 1, null)],
		text: 'Locks the front left and the front right. Lock-ups: 1, not 0. Check for a flat spot.'
	},
	{
		code: 'rear_lock',
		evidence: [evidence('rearLocks', '', 1, 0), evidence('lock_rl', '', 1, null)],
		text: 'Locks the rear left at a downshift: 1, not 0 times. Check for a flat spot.'
	},
	{ code: 'gear_other', evidence: [evidence('gear', '', 3, 2)], text: 'Takes the corner in gear 3, not 2.' },
	{
		code: 'short_shift',
		evidence: [evidence('shiftSpeed', '1/min', 6100, 7000, 520)],
		text: 'Shifts up at 6100 1/min, not 7000 1/min, at 520 m.'
	},
	{
		code: 'spread_onset',
		evidence: [evidence('onsetSpread', 'm', 8.4, null)],
		text: 'Brakes at places that differ by 8 m from lap to lap (standard deviation).'
	},
	{
		code: 'spread_min_speed',
		evidence: [evidence('minSpeedSpread', 'km/h', 3.6, null)],
		text: 'The lowest speed differs by 4 km/h from lap to lap (standard deviation).'
	},
	{
		code: 'brake_early',
		evidence: [evidence('onset', 'm', -3.2, 1.1, -3.2)],
		text: 'Brakes 4 m early: at 3 m before the line, not 1 m.'
	}
];

/** what a reader sees: a no-break space looks like a space */
const seen = (text: string) => text.replaceAll('\u00a0', ' ');

describe('findingText', () => {
	it.each(CASES)('$code: $text', ({ code, evidence: pieces, text }) => {
		expect(seen(findingText({ code, evidence: pieces }))).toBe(text);
	});

	it('has a sentence for every published code', () => {
		expect(new Set(CASES.map(({ code }) => code))).toEqual(new Set(findingCodeSchema.options));
	});

	it('puts a no-break space between number and unit, and U+2212 for minus', () => {
		const text = findingText({ code: 'exit_speed_low', evidence: [evidence('exitSpeed', 'km/h', -3, 96)] });
		expect(text).toBe('Leaves at \u22123\u00a0km/h, not 96\u00a0km/h.');
	});

	it('sets each reference value apart, so that a page can mark it', () => {
		const parts = findingParts(CASES.find(({ code }) => code === 'peak_under') ?? CASES[0]).filter(
			(part) => part.isReference
		);
		expect(parts.map(({ text }) => seen(text))).toEqual(['95 %', '9.5 m/s²', '1209 m']);
	});

	it('names no remedy: nothing tells a driver to brake later, harder, or to stay flat', () => {
		for (const { code, evidence: pieces } of CASES)
			expect(findingText({ code, evidence: pieces })).not.toMatch(
				/brake later|\bflat\b(?! spot)|should|try |must|could/i
			);
	});
});
