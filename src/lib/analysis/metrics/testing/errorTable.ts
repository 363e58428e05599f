/** Errors by quantity and rate, for a test that prints what it holds against its bars. */
export class ErrorTable {
	readonly #errors = new Map<string, Map<string, number[]>>();

	/** An absent value (NaN) counts as infinitely wrong. */
	add(quantity: string, rate: string, error: number): void {
		const byRate = this.#errors.get(quantity) ?? new Map<string, number[]>();
		this.#errors.set(quantity, byRate);
		const held = byRate.get(rate) ?? [];
		byRate.set(rate, held);
		held.push(Number.isNaN(error) ? Infinity : Math.abs(error));
	}

	row(quantity: string, rate: string): { median: number; p95: number; worst: number; count: number } {
		const sorted = Float64Array.from(this.#errors.get(quantity)?.get(rate) ?? []).sort();
		const at = (share: number) => (sorted.length === 0 ? NaN : sorted[Math.ceil(share * (sorted.length - 1))]);
		return { median: at(0.5), p95: at(0.95), worst: at(1), count: sorted.length };
	}

	print(barOf: (quantity: string, rate: string) => number): string {
		const lines = ['quantity                rate           median       p95     worst       bar      n'];
		for (const [quantity, byRate] of this.#errors) {
			for (const rate of byRate.keys()) {
				const { median, p95, worst, count } = this.row(quantity, rate);
				const numbers = [median, p95, worst, barOf(quantity, rate)].map((value) => value.toPrecision(3).padStart(10));
				lines.push(`${quantity.padEnd(23)} ${rate.padEnd(11)}${numbers.join('')}${String(count).padStart(7)}`);
			}
		}
		return lines.join('\n');
	}
}
