import { describe, expect, it } from 'vitest';
import { intakeAnswersSchema } from '../schemas/intake.ts';
import { intakeAdvice } from './intake.ts';

const advise = (answers: Record<string, unknown>) => intakeAdvice(intakeAnswersSchema.parse(answers)).join(' ');

describe('advice on an intake (common practice, no source)', () => {
	it('says nothing where nothing was answered', () => {
		expect(advise({})).toBe('');
	});
	it.each([
		{ answers: { drivingLine: 'always' }, says: /without the drawn line/ },
		{ answers: { drivingLine: 'never' }, says: /^$/ },
		{ answers: { place: 'simulator', brakeCurve: 'bent' }, says: /brake to linear/ },
		{ answers: { place: 'simulator', brakeCurve: 'linear' }, says: /^$/ },
		{ answers: { sampleRateHz: '20' }, says: /At 20 samples/ },
		{ answers: { sampleRateHz: '50' }, says: /^$/ }
	])('answers $answers', ({ answers, says }) => {
		expect(advise(answers)).toMatch(says);
	});
	it('never speaks of the brake of a real car, which its maker and the rules decide on', () => {
		expect(advise({ place: 'circuit', brakeCurve: 'bent', brakePedal: 'travel' })).toBe('');
	});
});
