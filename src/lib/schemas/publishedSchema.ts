import { z } from 'zod';
import { analysisDocumentSchema } from './analysisDocument.ts';
import { pedalDocumentSchema } from './pedalDocument.ts';
import { stintDocumentSchema } from './stintDocument.ts';

/**
 * The JSON Schema of the document that `analyse` prints, as it is published at `/schemas/kerbnote.analysis-1.json`. Readers must
 * put up with fields that are added later, so it does not forbid further ones.
 */
export function publishedAnalysisSchema(): Record<string, unknown> {
	const schema = z.toJSONSchema(analysisDocumentSchema, { target: 'draft-2020-12', io: 'input', reused: 'ref' });
	return { ...schema, $id: 'urn:kerbnote:analysis:1', title: 'kerbnote.analysis/1' };
}

/** The same for `analyse --pedal` and `analyse --stint`, at `/schemas/kerbnote.pedal-1.json` and `/schemas/kerbnote.stint-1.json`. */
export function publishedCheckSchemas(): Record<'pedal' | 'stint', Record<string, unknown>> {
	const published = (name: string, document: z.ZodType) => ({
		...z.toJSONSchema(document, { target: 'draft-2020-12', io: 'input', reused: 'ref' }),
		$id: `urn:kerbnote:${name}:1`,
		title: `kerbnote.${name}/1`
	});
	return { pedal: published('pedal', pedalDocumentSchema), stint: published('stint', stintDocumentSchema) };
}
