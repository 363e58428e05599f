import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { adviceGateSchema, findingCodeSchema, type AdviceGate, type FindingCode } from '../../schemas/codes.ts';
import { adviseOn, type AdvisedFinding } from './adviseOn.ts';
import { UNKNOWN_CIRCUMSTANCES, type Circumstances } from './circumstances.ts';
import { DRILLS } from './drills.ts';

const finding = (code: FindingCode, quantities: Record<string, [number, number | null]> = {}): AdvisedFinding => ({
	corner: 3,
	code,
	evidence: Object.entries(quantities).map(([quantity, [driver, reference]]) => ({
		quantity,
		unit: 'm',
		driver,
		reference,
		atM: null,
		plusMinus: null
	}))
});
const early = (gapM: number) => finding('brake_early', { onset: [400, 400 + gapM] });
const real: Circumstances = { ...UNKNOWN_CIRCUMSTANCES, place: 'real', conditions: 'dry' };
const simulator: Circumstances = { ...real, place: 'simulator' };

describe('adviseOn', () => {
	it.each([
		{ gapM: 4, stepM: 2 },
		{ gapM: 9, stepM: 4 },
		{ gapM: 30, stepM: 5 }
	])('moves a braking point by $stepM m of $gapM m, no more', ({ gapM, stepM }) => {
		for (const circumstances of [real, simulator, UNKNOWN_CIRCUMSTANCES]) {
			const [advice] = adviseOn([early(gapM)], circumstances);
			expect(advice.stepM).toBe(stepM);
			expect(advice.drill).toContain(`${stepM}\u00a0m`);
		}
	});

	it.each<{ name: string; with: Partial<Circumstances>; gate: AdviceGate }>([
		{ name: 'in the wet', with: { conditions: 'wet' }, gate: 'wet' },
		{ name: 'in the damp', with: { conditions: 'damp' }, gate: 'wet' },
		{ name: 'on cold tyres', with: { coldTyres: true }, gate: 'cold_tyres' },
		{ name: 'on the second timed lap', with: { timedLap: 2 }, gate: 'first_laps' },
		{ name: 'after a fade sign', with: { fade: true }, gate: 'fade' },
		{ name: 'where a coach marked no run-off', with: { noRunOff: [3] }, gate: 'no_run_off' }
	])('tells nobody in a real car to brake later $name', ({ with: change, gate }) => {
		const said = (base: Circumstances) => adviseOn([early(20)], { ...base, ...change })[0];
		expect(said(real)).toMatchObject({ drill: null, stepM: null, gates: [gate] });
		expect(said(UNKNOWN_CIRCUMSTANCES)).toMatchObject({ drill: null });
		expect(said(simulator).drill).not.toBeNull();
	});

	it.each(['release_abrupt', 'release_uneven', 'hold_missing', 'hold_short', 'hold_strong'] as const)(
		'keeps %s to drivers for whom trail braking is meant',
		(code) => {
			const drill = (change: Partial<Circumstances>, more: AdvisedFinding[] = []) =>
				adviseOn([finding(code), ...more], { ...real, ...change })[0].drill;
			expect(drill({})).not.toBeNull();
			for (const off of [{ rearBrakesOnly: true }, { conditions: 'wet' as const }, { beginner: true }]) {
				expect(drill(off)).toBeNull();
				expect(drill({ ...off, trailAllowed: true })).not.toBeNull();
			}
			expect(drill({}, [finding('rear_lock')])).toBeNull();
			expect(drill({}, [finding('lock_up', { lock_rl: [1, null] })])).toBeNull();
			expect(drill({}, [finding('lock_up', { lock_fl: [1, null] })])).not.toBeNull();
		}
	);

	it('advises a softer peak in a real car only where a wheel slipped', () => {
		const of = (findings: AdvisedFinding[], c: Circumstances) => adviseOn(findings, c)[0];
		expect(of([finding('peak_over')], real).gates).toEqual(['no_slip_evidence']);
		expect(of([finding('peak_over'), finding('lock_up')], real).drill).not.toBeNull();
		expect(of([finding('peak_over'), { ...finding('lock_up'), corner: 5 }], real).drill).toBeNull();
		expect(of([finding('peak_over')], simulator).drill).not.toBeNull();
	});

	it('says nothing on an open road or in a neutralised stretch, whatever the finding', () => {
		const all = findingCodeSchema.options.map((code) => finding(code));
		for (const change of [{ openRoad: true }, { neutralised: true }])
			expect(adviseOn(all, { ...simulator, ...change }).every(({ drill }) => drill === null)).toBe(true);
	});

	it('leaves what saves fuel or warms tyres alone where that was the intent', () => {
		const gates = (code: FindingCode, intent: Circumstances['intent']) =>
			adviseOn([finding(code, { onset: [1, 9] })], { ...simulator, intent })[0].gates;
		expect(gates('coasting', 'fuel')).toEqual(['saving_fuel']);
		expect(gates('coasting', 'pace')).toEqual([]);
		expect(gates('scrub', 'tyres')).toEqual(['warming_tyres']);
		expect(gates('lock_up', 'fuel')).toEqual([]);
	});

	it('asks for a look at the tyre after a lock-up and for cooling after a fade sign', () => {
		expect(adviseOn([finding('rear_lock')], real)[0].cautions).toEqual(['flat_spot']);
		expect(adviseOn([finding('lock_up')], { ...real, fade: true })[0].cautions).toEqual(['flat_spot', 'cool_down']);
		expect(adviseOn([finding('line')], { ...simulator, fade: true })[0].cautions).toEqual([]);
	});

	it('says nothing of a step that is none, or where the reference does not brake', () => {
		expect(adviseOn([early(1.2)], simulator)[0].gates).toEqual(['step_too_small']);
		expect(adviseOn([finding('brake_early', { onset: [400, null] })], real)[0].drill).toBeNull();
	});

	it('never lets a worse circumstance allow what a better one withholds', () => {
		const codes = fc.constantFrom(...findingCodeSchema.options);
		const worse = fc.constantFrom<Partial<Circumstances>>(
			{ conditions: 'wet' },
			{ coldTyres: true },
			{ timedLap: 1 },
			{ fade: true },
			{ noRunOff: [3] },
			{ rearBrakesOnly: true },
			{ beginner: true },
			{ openRoad: true }
		);
		fc.assert(
			fc.property(codes, worse, worse, (code, one, other) => {
				const one_ = adviseOn([finding(code, { onset: [0, 8] })], { ...real, ...one })[0];
				const both = adviseOn([finding(code, { onset: [0, 8] })], { ...real, ...one, ...other })[0];
				if (one_.drill === null) expect(both.drill).toBeNull();
			}),
			{ seed: 7, numRuns: 300 }
		);
	});

	it('has a drill for each finding that a driver can act on, and none that forbids lifting', () => {
		const without = findingCodeSchema.options.filter((code) => DRILLS[code] === null);
		expect(without).toEqual(['car_or_wind', 'carried_in']);
		for (const drill of Object.values(DRILLS)) expect(drill?.text ?? '').not.toMatch(/\bflat\b(?! spot)|brake later/i);
		expect(adviceGateSchema.options.length).toBeGreaterThan(10);
	});
});
