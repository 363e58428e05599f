/** Cookies as a browser keeps them between requests. */
export class CookieJar {
	readonly #cookies = new Map<string, string>();

	/** What `Cookies` of SvelteKit offers to a route, over this jar. */
	asCookies() {
		const get = (name: string) => this.#cookies.get(name);
		return {
			get,
			getAll: () => [...this.#cookies].map(([name, value]) => ({ name, value })),
			set: (name: string, value: string, options: { maxAge?: number; expires?: Date } = {}) => {
				const isGone = options.maxAge === 0 || (options.expires && options.expires.getTime() <= Date.now());
				if (isGone || value === '') this.#cookies.delete(name);
				else this.#cookies.set(name, value);
			},
			delete: (name: string) => void this.#cookies.delete(name),
			serialize: (name: string, value: string) => `${name}=${encodeURIComponent(value)}`
		};
	}

	/** Takes what a response sets. */
	take(response: Response): void {
		for (const line of response.headers.getSetCookie()) {
			const [pair, ...attributes] = line.split('; ');
			const at = pair.indexOf('=');
			const [name, value] = [pair.slice(0, at), decodeURIComponent(pair.slice(at + 1))];
			const isGone = attributes.some((attribute) => /^max-age=0$/i.test(attribute));
			if (isGone || value === '') this.#cookies.delete(name);
			else this.#cookies.set(name, value);
		}
	}

	get header(): string {
		return [...this.#cookies].map(([name, value]) => `${name}=${encodeURIComponent(value)}`).join('; ');
	}

	get(name: string): string | undefined {
		return this.#cookies.get(name);
	}

	/** The same cookies in another browser: what somebody has who copied them. */
	copy(): CookieJar {
		const copy = new CookieJar();
		for (const [name, value] of this.#cookies) copy.#cookies.set(name, value);
		return copy;
	}
}
