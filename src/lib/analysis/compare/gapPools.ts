/**
 * A speed gap split into the parts that causes have added to it. The parts always sum to the gap.
 *
 * Growth away from zero is added to one part; shrinking scales all parts alike, since a corner or a faster rival wipes a gap out
 * whatever its origin. Until `settle` is called, shrinking can be taken back: the jitter of a gap is followed down and up again
 * and charges nobody.
 */
export class GapPools {
	/** part of the gap by pool */
	readonly parts: Float64Array;
	/** pools that may hold a part; the only ones that change */
	readonly active: number[] = [];
	#base: Float64Array;
	#baseGap = 0;
	#gap = 0;

	/** @param pools how many pools there are */
	constructor(pools: number) {
		this.parts = new Float64Array(pools);
		this.#base = new Float64Array(pools);
	}

	get gap(): number {
		return this.#gap;
	}

	/** From here on shrinking is measured against the parts as they are now. Pools without a part are let go. */
	settle(): void {
		let kept = 0;
		for (const pool of this.active) {
			this.#base[pool] = this.parts[pool];
			if (this.parts[pool] !== 0) this.active[kept++] = pool;
		}
		this.active.length = kept;
		this.#baseGap = this.#gap;
	}

	/**
	 * The gap changes to `next`; what goes beyond the settled gap is charged.
	 *
	 * @param pool  who is charged with growth
	 * @param drift how far beyond the settled gap the old parts may grow before anybody is charged, 1 for not at all
	 */
	change(next: number, pool: number, drift = 1): void {
		const sameSide = next * this.#baseGap >= 0;
		const kept = sameSide ? Math.sign(next) * Math.min(Math.abs(next), Math.abs(this.#baseGap) * drift) : 0;
		const factor = this.#baseGap === 0 ? 0 : kept / this.#baseGap;
		for (const key of this.active) this.parts[key] = this.#base[key] * factor;
		this.#gap = next;
		if (next === kept) return;
		this.#add(pool, next - kept);
		for (const key of this.active) this.#base[key] = this.parts[key];
		this.#baseGap = next;
	}

	/** The old parts change by a known factor; the remainder of the way to `next` is charged to `pool`, whichever its sign. */
	evolve(next: number, factor: number, pool: number): void {
		for (const key of this.active) this.parts[key] *= factor;
		this.#add(pool, next - this.#gap * factor);
		this.#gap = next;
	}

	/** What one pool holds goes over to another. */
	move(from: number, to: number): void {
		const amount = this.parts[from];
		if (amount === 0) return;
		this.parts[from] = 0;
		this.#add(to, amount);
	}

	/**
	 * Parts against the gap's sign and as much of the others cancel each other: a tow makes up for a slow exit until the next corner,
	 * which wipes out both. Without it two large parts would hide in a gap of nothing.
	 */
	cancel(): void {
		let along = 0;
		for (const key of this.active) if (this.parts[key] * this.#gap > 0) along += this.parts[key];
		for (const key of this.active) {
			const same = this.parts[key] * this.#gap > 0;
			this.parts[key] = same ? (this.parts[key] * this.#gap) / along : 0;
		}
	}

	#add(pool: number, amount: number): void {
		if (!this.active.includes(pool)) {
			this.active.push(pool);
			this.#base[pool] = 0;
			this.parts[pool] = 0;
		}
		this.parts[pool] += amount;
	}
}
