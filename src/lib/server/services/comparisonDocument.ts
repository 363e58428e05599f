import type { ComparisonDocument, ComparisonView } from '../../schemas/views.ts';
import { US_PER_S } from '../../units.ts';
import { ContentCache } from './contentCache.ts';

/** About 150 kB each. */
const KEPT = 100;
const cache = new ContentCache<string>(KEPT);

/** Δ in whole microseconds, as lap times are stored: more digits would be noise. */
const toUs = (seconds: number): number => Math.round(seconds * US_PER_S) / US_PER_S;

/** The JSON of `GET /api/v1/compare/{lap}/{reference}`, written once for each content. */
export function comparisonJson(view: ComparisonView): string {
	const known = cache.get(view.contentHash);
	if (known !== undefined) return known;
	const { driver, reference, layout, corners, cells, driverMetrics, comparison, fairness, warnings } = view;
	const document: ComparisonDocument = {
		driver,
		reference,
		layout,
		corners,
		cells,
		driverMetrics,
		comparison: { ...comparison, delta: comparison.delta.map(toUs) },
		fairness,
		warnings
	};
	const json = JSON.stringify(document);
	cache.set(view.contentHash, json);
	return json;
}
