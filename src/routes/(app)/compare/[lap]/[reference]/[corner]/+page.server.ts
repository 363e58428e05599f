import { z } from 'zod';
import { formatDay } from '$lib/format/date';
import { notFound } from '$lib/server/http/notFound';
import { loadCornerCard } from '$lib/server/services/loadCompareModels';
import { layoutName } from '$lib/texts/runs';
import { lapChoices, otherLaps, referenceChoices } from '../choices';
import { signedIn } from '../../../../signedIn';
import type { PageServerLoad } from './$types';

const cornerSchema = z
	.string()
	.regex(/^[1-9]\d{0,2}$/)
	.transform(Number);

export const load = (async ({ locals, params, url }) => {
	const viewer = signedIn(locals);
	const corner = cornerSchema.safeParse(params.corner);
	if (!corner.success) notFound();
	const date = { now: new Date() };
	const { speedUnit } = viewer.preferences;
	const { view, card } = await loadCornerCard(viewer, params.lap, params.reference, corner.data, { speedUnit, date });
	const { layout, driver } = view;
	// Another lap or reference shows the same corner in the same way.
	const place = `/${corner.data}${url.searchParams.get('view') === 'table' ? '?view=table' : ''}`;
	return {
		card,
		brakeScale: view.brakeScale,
		others: otherLaps(view),
		laps: lapChoices(view, place),
		references: referenceChoices(view, date, place),
		place: layoutName(layout),
		detail: [
			driver.car?.name ?? null,
			driver.startedAt === null ? null : formatDay(driver.startedAt, date),
			`lap\u00a0${driver.number}`
		]
			.filter((part) => part !== null)
			.join(' · ')
	};
}) satisfies PageServerLoad;
