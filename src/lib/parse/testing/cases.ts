import { dialects } from './dialectCases.ts';
import { languages, lapSources } from './lapCases.ts';
import { cells, quantities } from './quantityCases.ts';
import { times } from './timeCases.ts';
import type { AcceptedCase } from './writtenColumns.ts';

export { REFUSED_CASES } from './refusedCases.ts';

export const ACCEPTED_CASES: readonly AcceptedCase[] = [
	...dialects,
	...quantities,
	...times,
	...cells,
	...lapSources,
	...languages
];
