const SIGNS: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };

/**
 * Text as HTML shows it.
 *
 * @example escapeHtml('a<b') // => 'a&lt;b'
 */
export function escapeHtml(text: string): string {
	return text.replaceAll(/[&<>"']/g, (sign) => SIGNS[sign]);
}
