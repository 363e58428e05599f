/**
 * Answers that were worked out already, by the hash of all that they depend on: nothing in it can be out of date, and losing
 * it costs time alone. Each node has its own.
 */
export class ContentCache<Value> {
	readonly #entries = new Map<string, Value>();

	constructor(private readonly most: number) {}

	get(hash: string): Value | undefined {
		const value = this.#entries.get(hash);
		if (value !== undefined) {
			// A Map keeps the order of insertion, so what was used last goes to the end.
			this.#entries.delete(hash);
			this.#entries.set(hash, value);
		}
		return value;
	}

	set(hash: string, value: Value): void {
		this.#entries.set(hash, value);
		if (this.#entries.size > this.most) {
			const [oldest] = this.#entries.keys();
			this.#entries.delete(oldest);
		}
	}
}
