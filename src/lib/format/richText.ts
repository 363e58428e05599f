/** A run of characters in one style. `reference` is a value of the reference, which only the reference's pen may mark. */
export interface RichSpan {
	text: string;
	style: 'plain' | 'strong' | 'emphasis' | 'reference';
}

export type RichBlock = { kind: 'paragraph'; spans: RichSpan[] } | { kind: 'list'; items: RichSpan[][] };

/** `**strong**`, `*emphasis*`, `==a value of the reference==`; a sign without its partner is only a sign. */
const STYLED = /\*\*(?=\S)([^*\n]+?)(?<=\S)\*\*|\*(?=\S)([^*\n]+?)(?<=\S)\*|==(?=\S)([^=\n]+?)(?<=\S)==/g;
const ITEM = /^\s*[-*]\s+(.*)$/;

/**
 * Reads the light formatting of notes and debriefs: paragraphs, lists ("- " at the start of a line), emphasis. There is nothing else:
 * whatever looks like HTML is text.
 */
export function readRichText(text: string): RichBlock[] {
	const blocks: RichBlock[] = [];
	for (const part of text.replaceAll('\r\n', '\n').split(/\n[ \t]*\n+/)) {
		let lines: string[] = [];
		let items: RichSpan[][] = [];
		const end = () => {
			if (lines.length > 0) blocks.push({ kind: 'paragraph', spans: spansOf(lines.join('\n')) });
			if (items.length > 0) blocks.push({ kind: 'list', items });
			[lines, items] = [[], []];
		};
		for (const line of part.split('\n')) {
			const item = ITEM.exec(line);
			if (item) {
				if (lines.length > 0) end();
				items.push(spansOf(item[1]));
			} else if (line.trim() !== '') {
				if (items.length > 0) end();
				lines.push(line.trim());
			}
		}
		end();
	}
	return blocks;
}

function spansOf(text: string): RichSpan[] {
	const spans: RichSpan[] = [];
	let from = 0;
	for (const match of text.matchAll(STYLED)) {
		if (match.index > from) spans.push({ text: text.slice(from, match.index), style: 'plain' });
		const [whole, strong, emphasis, reference] = match;
		if (strong !== undefined) spans.push({ text: strong, style: 'strong' });
		else if (emphasis !== undefined) spans.push({ text: emphasis, style: 'emphasis' });
		else spans.push({ text: reference, style: 'reference' });
		from = match.index + whole.length;
	}
	if (from < text.length) spans.push({ text: text.slice(from), style: 'plain' });
	return spans;
}

const ESCAPES: Readonly<Record<string, string>> = {
	'&': '&amp;',
	'<': '&lt;',
	'>': '&gt;',
	'"': '&quot;',
	"'": '&#39;'
};

/** Text as HTML that says exactly this text. */
export function escapeHtml(text: string): string {
	return text.replaceAll(/[&<>"']/g, (sign) => ESCAPES[sign]);
}

const TAGS = { plain: null, strong: 'strong', emphasis: 'em', reference: 'mark' } as const;

/**
 * The text as HTML, every character of it escaped; for e-mail, where no component draws.
 *
 * @example richTextHtml('*wait* <b>') // => "<p><em>wait</em> &lt;b&gt;</p>"
 */
export function richTextHtml(text: string): string {
	const spans = (some: readonly RichSpan[]) =>
		some
			.map(({ text: said, style }) => {
				const escaped = escapeHtml(said).replaceAll('\n', '<br>');
				const tag = TAGS[style];
				return tag === null ? escaped : `<${tag}>${escaped}</${tag}>`;
			})
			.join('');
	return readRichText(text)
		.map((block) =>
			block.kind === 'paragraph'
				? `<p>${spans(block.spans)}</p>`
				: `<ul>${block.items.map((item) => `<li>${spans(item)}</li>`).join('')}</ul>`
		)
		.join('');
}

/** The words alone, for the text part of an e-mail and for lists. */
export function plainText(text: string): string {
	const said = (spans: readonly RichSpan[]) => spans.map((span) => span.text).join('');
	return readRichText(text)
		.map((block) =>
			block.kind === 'paragraph' ? said(block.spans) : block.items.map((item) => `- ${said(item)}`).join('\n')
		)
		.join('\n\n');
}
