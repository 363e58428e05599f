/**
 * Deterministic random numbers for invented laps: the same seed gives the same laps on every machine.
 *
 * Mulberry32 (public domain, Tommy Ettinger; from memory): 32 bits of state are plenty for a few thousand human errors.
 *
 * @param seed any integer
 * @returns `uniform` in [0, 1) and `normal` with mean 0 and s.d. 1 (Box–Muller)
 */
export function seededRandom(seed: number): { uniform: () => number; normal: () => number } {
	let state = seed >>> 0;
	const uniform = (): number => {
		state = (state + 0x6d2b79f5) >>> 0;
		let t = state;
		t = Math.imul(t ^ (t >>> 15), t | 1);
		t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
		return ((t ^ (t >>> 14)) >>> 0) / 4_294_967_296;
	};
	const normal = (): number => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
	return { uniform, normal };
}
