import { exampleSource } from '$lib/charts/exampleSource';
import type { TraceSource } from '$lib/charts/traceSource';
import type { CornerCard } from '$lib/view/cornerCard';
import { exampleComparison } from '$lib/view/example/exampleComparison';

/** The numbers under the cursor of the example card, made in the browser: nobody's lap is sent to a page without a sign-in. */
export function exampleTraces(card: CornerCard): TraceSource {
	return exampleSource(exampleComparison(), card);
}
