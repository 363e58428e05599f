import { z } from 'zod';
import { layoutNamesSchema, runDescriptionSchema } from '../../../../lib/schemas/api.ts';
import { CORNER_FIELD } from './cornerField.ts';

/** Fields of a form that hold text. */
function textFields(form: FormData): Map<string, string> {
	return new Map([...form].flatMap(([name, value]) => (typeof value === 'string' ? [[name, value] as const] : [])));
}

/** A number as people write it, with point or comma; empty is none, and what is no number is left for the schema to refuse. */
const writtenNumber = z.string().transform((text) => {
	const trimmed = text.trim();
	return trimmed === '' ? null : Number(trimmed.replace(',', '.'));
});

/** What the form about a run says; issues by field where it cannot be taken. */
export function readDescription(form: FormData) {
	const { fuelKg, ...said } = Object.fromEntries(textFields(form));
	return readWith(runDescriptionSchema, {
		...said,
		...(fuelKg === undefined ? {} : { fuelKg: writtenNumber.parse(fuelKg) })
	});
}

/** What the form of names says. */
export function readNames(form: FormData) {
	const fields = textFields(form);
	const corners = Object.fromEntries(
		[...fields].flatMap(([name, value]) =>
			name.startsWith(CORNER_FIELD) ? [[name.slice(CORNER_FIELD.length), value] as const] : []
		)
	);
	return readWith(layoutNamesSchema, {
		circuitName: fields.get('circuitName'),
		layoutName: fields.get('layoutName'),
		corners
	});
}

type Reading<Value> = { value: Value; issues: null } | { value: null; issues: Record<string, string[]> };

/** Issues by the name of the form's field, so that each stands where it was made. */
function readWith<Value>(schema: z.ZodType<Value>, input: unknown): Reading<Value> {
	const parsed = schema.safeParse(input);
	if (parsed.success) return { value: parsed.data, issues: null };
	const issues: Record<string, string[]> = {};
	for (const { path, message } of parsed.error.issues) {
		const field = path[0] === 'corners' ? `${CORNER_FIELD}${String(path[1])}` : String(path[0]);
		(issues[field] ??= []).push(message.charAt(0).toUpperCase() + message.slice(1));
	}
	return { value: null, issues };
}
