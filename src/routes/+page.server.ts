import { cornerCard, type CornerCard } from '$lib/view/cornerCard';
import { exampleComparison } from '$lib/view/example/exampleComparison';
import type { PageServerLoad } from './$types';

/** The corner that shows most of what a card can say. */
const EXAMPLE_CORNER = 4;

/** Made once: the example is the same for everybody and holds nobody's data. */
let example: CornerCard | null = null;

export const load = (({ url }) => {
	example ??= cornerCard(exampleComparison(), EXAMPLE_CORNER);
	return { card: example, asTable: url.searchParams.get('view') === 'table' };
}) satisfies PageServerLoad;
