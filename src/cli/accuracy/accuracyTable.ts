import type { Accuracy } from '../../lib/method/accuracy.ts';

/** Table of |error| by quantity and rate, as the method page and the tests show it. */

export const RATES = ['60 Hz', '20 Hz', '10 Hz', '60 Hz with noise'] as const;
export type Rate = (typeof RATES)[number];
export type AccuracyRow = Accuracy['rows'][number];

/** Bars by rate in the order of RATES; null where the quantity is not measured at that rate. */
type Bars = readonly [number | null, number | null, number | null, number | null];

/** What is measured, in the order of the table. */
export const QUANTITIES = {
	lapTime: { name: 'lap time', unit: 'ms', bars: [1, 1, 1, 1] },
	delta: { name: 'Δ, worst over the lap', unit: 'ms', bars: [1, 1, 2, 25] },
	deltaOtherLine: { name: 'Δ on another line', unit: 'ms', bars: [1, null, null, 25] },
	deltaTimeSpeed: { name: 'Δ from time and speed alone', unit: 'ms', bars: [25, null, null, null] },
	corners: { name: 'corners found too many or too few', unit: '', bars: [0, 0, 0, 1] },
	cornerEdge: { name: 'corner start and end', unit: 'm', bars: [2, 2, 2, 15] },
	onset: { name: 'brake onset', unit: 'm', bars: [0.3, 1.4, 3.8, 0.5] },
	peak: { name: 'peak brake', unit: '%', bars: [2, 9, 19, 3] },
	releaseEnd: { name: 'release end', unit: 'ms', bars: [20, 60, 130, 120] },
	minSpeed: { name: 'minimum speed', unit: 'km/h', bars: [0.1, 0.1, 0.3, 0.5] },
	pickUp: { name: 'throttle pick-up', unit: 'm', bars: [0.3, 0.6, 1.4, 0.5] },
	fullThrottle: { name: 'full throttle', unit: 'ms', bars: [20, 20, 50, 25] },
	coasting: { name: 'coasting', unit: 'ms', bars: [15, 50, 127, 40] },
	lightHold: { name: 'light hold', unit: 'ms', bars: [40, 80, 160, 150] },
	ledger: { name: 'ledger against the gap', unit: 'µs', bars: [1, 1, 1, 1] },
	findingCost: { name: 'cost of the first finding', unit: 'ms', bars: [10, 15, 30, 60] }
} satisfies Record<string, { name: string; unit: string; bars: Bars }>;
export type Quantity = keyof typeof QUANTITIES;

/** Collects errors and sums them up. */
export class AccuracyTable {
	readonly #errors = new Map<string, number[]>();

	/** @param error signed or not; NaN, a value that lacks, counts as infinitely wrong */
	add(quantity: Quantity, rate: Rate, error: number): void {
		const key = `${quantity}|${rate}`;
		const known = this.#errors.get(key);
		const size = Number.isFinite(error) ? Math.abs(error) : Infinity;
		if (known) known.push(size);
		else this.#errors.set(key, [size]);
	}

	rows(): AccuracyRow[] {
		const rows: AccuracyRow[] = [];
		for (const [quantity, { name, unit, bars }] of Object.entries(QUANTITIES)) {
			RATES.forEach((rate, i) => {
				const errors = this.#errors.get(`${quantity}|${rate}`)?.sort((a, b) => a - b);
				const bar = bars[i];
				if (!errors || bar === null) return;
				rows.push({
					quantity: name,
					unit,
					rate,
					count: errors.length,
					median: threeFigures(atShare(errors, 0.5)),
					p95: threeFigures(atShare(errors, 0.95)),
					worst: threeFigures(errors[errors.length - 1]),
					bar
				});
			});
		}
		return rows;
	}
}

/** As far as an error means anything; null where a value lacks. */
const threeFigures = (x: number): number | null => (Number.isFinite(x) ? Number(x.toPrecision(3)) : null);

/** Does the row hold its bar? */
export function holds({ p95, bar }: AccuracyRow): boolean {
	return bar === null || (p95 !== null && p95 <= bar + 1e-9);
}

/** Linear interpolation between the ranks, as numpy does by default. */
function atShare(sorted: readonly number[], share: number): number {
	const rank = (sorted.length - 1) * share;
	const low = Math.floor(rank);
	const high = Math.min(low + 1, sorted.length - 1);
	return low === high || sorted[low] === sorted[high]
		? sorted[low]
		: sorted[low] + (sorted[high] - sorted[low]) * (rank - low);
}

/** The table as lines of text. */
export function printTable(rows: readonly AccuracyRow[]): string {
	const number = (x: number | null) => (x === null ? 'none' : String(x));
	const lines = rows.map((row) =>
		[
			holds(row) ? ' ' : '!',
			`${row.quantity}${row.unit ? `, ${row.unit}` : ''}`.padEnd(36),
			row.rate.padEnd(16),
			...[row.median, row.p95, row.worst].map((x) => number(x).padStart(9)),
			number(row.bar).padStart(6),
			String(row.count).padStart(5)
		].join(' ')
	);
	const head = `  ${''.padEnd(36)} ${''.padEnd(16)}    median       p95     worst    bar count`;
	return [head, ...lines].join('\n');
}
