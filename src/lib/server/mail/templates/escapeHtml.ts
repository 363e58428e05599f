const SIGNS: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };

/** @example escapeHtml('<b> & "') // => '&lt;b&gt; &amp; &quot;' */
export function escapeHtml(text: string): string {
	return text.replaceAll(/[&<>"']/g, (sign) => SIGNS[sign]);
}
