/** Standard normal numbers from a seed: Box–Muller over a linear congruential generator (Numerical Recipes' constants, from memory). */
export function seededNormal(seed: number): () => number {
	let state = seed >>> 0;
	const uniform = () => {
		state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
		return (state + 0.5) / 2 ** 32;
	};
	return () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
}
