import { formatDay, type DateFormat } from '$lib/format/date';
import { formatDistance } from '$lib/format/distance';
import type { ComparisonView, LapHead } from '$lib/schemas/views';
import { layoutName } from '$lib/texts/runs';
import { driverLabel, referenceLabel } from '$lib/view/lapLabels';

/** A lap that could stand in the place of another: which, how fast, and where the page with it lives. */
export interface LapChoice {
	key: string;
	href: string;
	name: string;
	time: string;
	state: string;
	current: boolean;
}

const compareHref = (lap: LapHead, reference: LapHead): string => `/compare/${lap.id}/${reference.id}`;

/** "Vallmere Park, grand prix · 3 621 m · Brindle GT · 14 May": where the driver's lap was driven. */
export function compareKick({ layout, driver }: ComparisonView, date: DateFormat): string {
	return [
		layoutName(layout),
		formatDistance(layout.lengthM),
		driver.car?.name ?? null,
		driver.startedAt === null ? null : formatDay(driver.startedAt, date)
	]
		.filter((part) => part !== null)
		.join(' · ');
}

/** Laps that may stand as reference, the present one first. */
export function referenceChoices(
	{ driver, reference, otherReferences }: ComparisonView,
	date: DateFormat
): LapChoice[] {
	const others = otherReferences.filter((lap) => lap.id !== reference.id && lap.id !== driver.id);
	return [reference, ...others].map((lap) => {
		const label = referenceLabel(lap, driver, date);
		return {
			key: lap.id,
			href: compareHref(driver, lap),
			name: `${label.name}, ${label.which}`,
			time: label.time,
			state: label.state,
			current: lap.id === reference.id
		};
	});
}

/** The laps of the driver's run; the best clean one and the median one are said, for they answer different questions. */
export function lapChoices({ driver, reference, runLaps }: ComparisonView): LapChoice[] {
	const clean = runLaps.filter((lap) => lap.clean).sort((a, b) => a.timeS - b.timeS);
	const best = clean[0];
	const median = clean.length > 2 ? clean[Math.floor((clean.length - 1) / 2)] : undefined;
	return runLaps
		.filter((lap) => lap.id !== reference.id)
		.map((lap) => {
			const label = driverLabel(lap);
			const role = lap.id === best?.id ? ', the best' : lap.id === median?.id ? ', the median' : '';
			return {
				key: lap.id,
				href: compareHref(lap, reference),
				name: label.which + role,
				time: label.time,
				state: label.state,
				current: lap.id === driver.id
			};
		});
}
