import { z } from 'zod';
import { analysisDocumentSchema } from './analysisDocument.ts';

/**
 * The JSON Schema of the document that `analyse` prints, as it is published at `/schemas/kerbnote.analysis-1.json`. Readers must
 * put up with fields that are added later, so it does not forbid further ones.
 */
export function publishedAnalysisSchema(): Record<string, unknown> {
	const schema = z.toJSONSchema(analysisDocumentSchema, { target: 'draft-2020-12', io: 'input', reused: 'ref' });
	return { ...schema, $id: 'urn:kerbnote:analysis:1', title: 'kerbnote.analysis/1' };
}
