import type { ComparisonView } from '../../schemas/views.ts';
import { comparePage, type ComparePage } from '../../view/comparePage.ts';
import { cornerCard, type CardOptions, type CornerCard } from '../../view/cornerCard.ts';
import type { Viewer } from '../access/viewer.ts';
import { notFound } from '../http/notFound.ts';
import { ContentCache } from './contentCache.ts';
import { loadComparison } from './loadComparison.ts';

/** A page with its dozen of small cards is some 60 kB, a card 20 kB. */
const KEPT_PAGES = 100;
const KEPT_CARDS = 300;
const pages = new ContentCache<ComparePage>(KEPT_PAGES);
const cards = new ContentCache<CornerCard>(KEPT_CARDS);

/**
 * A comparison as the compare page draws it.
 *
 * @throws as loadComparison
 */
export async function loadComparePage(
	viewer: Viewer,
	lapId: string,
	referenceId: string,
	options: CardOptions
): Promise<{ view: ComparisonView; page: ComparePage }> {
	const view = await loadComparison(viewer, lapId, referenceId);
	const key = modelKey(view, options);
	const page = pages.get(key) ?? comparePage(view, options);
	pages.set(key, page);
	return { view, page };
}

/**
 * One corner of a comparison as its card draws it.
 *
 * @throws as loadComparison; 404 also where the layout has no such numbered corner
 */
export async function loadCornerCard(
	viewer: Viewer,
	lapId: string,
	referenceId: string,
	corner: number,
	options: CardOptions
): Promise<{ view: ComparisonView; card: CornerCard }> {
	const view = await loadComparison(viewer, lapId, referenceId);
	const key = `${modelKey(view, options)} ${corner}`;
	const card = cards.get(key) ?? cornerCard(view, corner, options);
	if (card === null) notFound();
	cards.set(key, card);
	return { view, card };
}

/** What a model depends on beside the corner: the content, the reader's unit, and the year, which dates leave out. */
function modelKey({ contentHash }: ComparisonView, { speedUnit, date }: CardOptions): string {
	return [
		contentHash,
		speedUnit ?? '',
		date?.locale ?? '',
		date?.timeZone ?? '',
		date?.now?.getUTCFullYear() ?? ''
	].join(' ');
}
