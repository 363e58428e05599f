const SIGNS: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };

/**
 * Text as HTML shows it.
 *
 * @example escapeHtml('<b> & "c"') // => "&lt;b&gt; &amp; &quot;c&quot;"
 */
export function escapeHtml(text: string): string {
	return text.replaceAll(/[&<>"']/g, (sign) => SIGNS[sign]);
}
