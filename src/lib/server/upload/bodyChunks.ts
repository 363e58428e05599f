/** The body of a request in the pieces in which it comes; nothing for a request without one. */
export async function* bodyChunks(request: Request): AsyncIterable<Uint8Array> {
	if (request.body === null) return;
	const reader = request.body.getReader();
	try {
		for (;;) {
			const { done, value } = await reader.read();
			if (done) return;
			yield value;
		}
	} finally {
		// Where the file is refused half-way, what is still under way is not waited for.
		await reader.cancel().catch(() => {});
	}
}
