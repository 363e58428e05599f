export type Encoding = 'br' | 'gzip';

/**
 * Chooses how to compress an answer from what the client says it can read (RFC 9110, 12.5.3).
 *
 * Brotli before gzip where the client likes both as much. A name with `q=0` is refused; `*` stands for what is not named.
 *
 * @param accepted the request's `Accept-Encoding`; null where it sent none
 * @returns null where the answer must go as it is
 * @example chooseEncoding('gzip, deflate, br') // => 'br'
 */
export function chooseEncoding(accepted: string | null): Encoding | null {
	const weights = new Map<string, number>();
	for (const part of (accepted ?? '').toLowerCase().split(',')) {
		const [name, ...parameters] = part.split(';').map((piece) => piece.trim());
		if (!name) continue;
		const quality = parameters.find((parameter) => parameter.startsWith('q='));
		const weight = quality === undefined ? 1 : Number(quality.slice(2));
		weights.set(name, weight >= 0 && weight <= 1 ? weight : 0);
	}
	const others = weights.get('*') ?? 0;
	const brotli = weights.get('br') ?? others;
	const gzip = weights.get('gzip') ?? weights.get('x-gzip') ?? others;
	if (brotli > 0 && brotli >= gzip) return 'br';
	return gzip > 0 ? 'gzip' : null;
}
