import { z } from 'zod';

/** Short answers of one line; empty is an answer. */
const line = z.string().trim().max(200, 'Keep it to 200 characters');
const passage = z.string().trim().max(2000, 'Keep it to 2000 characters');
const notSaid = 'unsaid' as const;

export const INTAKE_CHOICES = {
	place: ['simulator', 'circuit', 'both', notSaid],
	experience: ['first-season', 'some-seasons', 'races', 'long', notSaid],
	brakePedal: ['force', 'travel', 'hydraulic', 'car', notSaid],
	wheel: ['direct', 'belt', 'gear', 'car', notSaid],
	view: ['three-screens', 'one-screen', 'headset', 'car', notSaid],
	drivingLine: ['never', 'corners', 'always', notSaid]
} as const;

/** What a driver tells a coach before the first hour. Every question may stay open. */
export const intakeAnswersSchema = z.object({
	place: z.enum(INTAKE_CHOICES.place).default(notSaid),
	experience: z.enum(INTAKE_CHOICES.experience).default(notSaid),
	goals: passage.default(''),
	car: line.default(''),
	brakePedal: z.enum(INTAKE_CHOICES.brakePedal).default(notSaid),
	/** is the pedal's output bent on purpose: a curve set in its software */
	brakeCurve: z.enum(['linear', 'bent', notSaid]).default(notSaid),
	wheel: z.enum(INTAKE_CHOICES.wheel).default(notSaid),
	view: z.enum(INTAKE_CHOICES.view).default(notSaid),
	drivingLine: z.enum(INTAKE_CHOICES.drivingLine).default(notSaid),
	/** aids that the car or the simulator gives */
	aids: z.array(z.enum(['brakes', 'traction', 'stability', 'gears', 'steering'])).default([]),
	/** of the logger; null when not known */
	sampleRateHz: z
		.union([z.literal('').transform(() => null), z.coerce.number('Write the rate in Hz, as a number').min(1).max(1000)])
		.nullable()
		.default(null),
	/** what a coach should know: health, hours, anything */
	more: passage.default('')
});
export type IntakeAnswers = z.output<typeof intakeAnswersSchema>;

export const intakeViewSchema = z.object({
	answers: intakeAnswersSchema,
	version: z.number().int(),
	savedAt: z.iso.datetime(),
	/** who wrote this version */
	savedBy: z.string().nullable()
});
export type IntakeView = z.infer<typeof intakeViewSchema>;
