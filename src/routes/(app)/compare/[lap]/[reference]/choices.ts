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

/** More grey lines than these are a smudge, and more requests than anybody asked for. */
const MOST_OTHERS = 12;

/** The same kind of page for another pair: `place` is what follows the pair, "/4?view=table" or "?order=lap". */
const compareHref = (lap: LapHead, reference: LapHead, place: string): string =>
	`/compare/${lap.id}/${reference.id}${place}`;

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
	date: DateFormat,
	place = ''
): LapChoice[] {
	const others = otherReferences.filter((lap) => lap.id !== reference.id && lap.id !== driver.id);
	return [reference, ...others].map((lap) => {
		const label = referenceLabel(lap, driver, date);
		return {
			key: lap.id,
			href: compareHref(driver, lap, place),
			name: `${label.name}, ${label.which}`,
			time: label.time,
			state: label.state,
			current: lap.id === reference.id
		};
	});
}

/** The run's further clean laps, best first: what can be drawn faintly behind the pair. */
export function otherLaps({ driver, reference, runLaps }: ComparisonView): { id: string; number: number }[] {
	return runLaps
		.filter((lap) => lap.clean && lap.id !== driver.id && lap.id !== reference.id)
		.sort((a, b) => a.timeS - b.timeS)
		.slice(0, MOST_OTHERS)
		.sort((a, b) => a.number - b.number)
		.map(({ id, number }) => ({ id, number }));
}

/** The laps of the driver's run; the best clean one and the median one are said, for they answer different questions. */
export function lapChoices({ driver, reference, runLaps }: ComparisonView, place = ''): LapChoice[] {
	const { best, median } = bestAndMedian(runLaps);
	return runLaps
		.filter((lap) => lap.id !== reference.id)
		.map((lap) => {
			const label = driverLabel(lap);
			const role = lap.id === best?.id ? ', the best' : lap.id === median?.id ? ', the median' : '';
			return {
				key: lap.id,
				href: compareHref(lap, reference, place),
				name: label.which + role,
				time: label.time,
				state: label.state,
				current: lap.id === driver.id
			};
		});
}

/**
 * The best clean lap and the median one as a switch: the best says what the driver can do, the median what the driver does.
 *
 * @returns null where the run has too few clean laps for the two to differ, or where one of them is the reference itself
 */
export function lapSwitch(
	{ reference, runLaps }: ComparisonView,
	place = ''
): { value: string; label: string; href: string }[] | null {
	const { best, median } = bestAndMedian(runLaps);
	if (!best || !median || [best.id, median.id].includes(reference.id)) return null;
	return [
		{ lap: best, label: 'best lap' },
		{ lap: median, label: 'median lap' }
	].map(({ lap, label }) => ({ value: lap.id, label, href: compareHref(lap, reference, place) }));
}

function bestAndMedian(laps: readonly LapHead[]): { best?: LapHead; median?: LapHead } {
	const clean = laps.filter((lap) => lap.clean).sort((a, b) => a.timeS - b.timeS);
	return { best: clean[0], median: clean.length > 2 ? clean[Math.floor((clean.length - 1) / 2)] : undefined };
}
