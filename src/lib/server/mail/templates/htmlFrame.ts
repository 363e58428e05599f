import { escapeHtml } from './escapeHtml.ts';
import type { LetterModel, LetterPart } from './letterModel.ts';

/** The house's colours, written out: a mail program knows no tokens. */
const PAPER = '#faf8f2';
const SHEET = '#ffffff';
const INK = '#1d2433';
const RULE = '#d9d3c4';
const MUTED = '#5b6270';
const PLUM = '#6b3a6e';
/** Nothing is fetched from anywhere, so the reader's own serif stands in for the house's. */
const SERIF = "Fraunces, Georgia, 'Times New Roman', serif";
const SANS = "'Public Sans', system-ui, -apple-system, 'Segoe UI', Helvetica, Arial, sans-serif";

export interface FrameOptions {
	greeting: string | null;
	actionUrl: string;
	unsubscribeUrl: string | null;
}

/** A letter as HTML: a sheet on paper, one column, styles inline, no image, no script, nothing that is loaded. */
export function htmlFrame(model: LetterModel, { greeting, actionUrl, unsubscribeUrl }: FrameOptions): string {
	const paragraph = `margin:0 0 14px;font:400 16px/1.5 ${SANS};color:${INK}`;
	const small = `margin:0 0 10px;font:400 13px/1.5 ${SANS};color:${MUTED}`;
	const href = escapeHtml(actionUrl);
	return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light">
<title>${escapeHtml(model.subject)}</title>
</head>
<body style="margin:0;padding:0;background:${PAPER}">
<table role="presentation" width="100%" cellpadding="0" cellspacing="0" border="0" style="background:${PAPER}"><tr><td align="center" style="padding:28px 16px">
<table role="presentation" width="100%" cellpadding="0" cellspacing="0" border="0" style="max-width:560px">
<tr><td style="padding:0 0 12px;font:480 20px/1.2 ${SERIF};color:${INK}">Kerbnote</td></tr>
<tr><td style="padding:28px 28px 20px;background:${SHEET};border:1px solid ${RULE};border-radius:2px">
<h1 style="margin:0 0 16px;font:480 28px/1.12 ${SERIF};letter-spacing:-0.012em;color:${INK}">${escapeHtml(model.title)}</h1>
${greeting === null ? '' : `<p style="${paragraph}">${escapeHtml(greeting)}</p>\n`}${model.parts.map((part) => htmlPart(part, paragraph, small)).join('\n')}
<table role="presentation" cellpadding="0" cellspacing="0" border="0" style="margin:20px 0 18px"><tr><td style="background:${INK};border-radius:3px"><a href="${href}" style="display:inline-block;padding:14px 20px;font:600 15px/1 ${SANS};color:${SHEET};text-decoration:none">${escapeHtml(model.action.label)}</a></td></tr></table>
${model.after === null ? '' : `<p style="${small}">${escapeHtml(model.after)}</p>\n`}<p style="${small};word-break:break-all">${href}</p>
</td></tr>
<tr><td style="padding:14px 2px 0"><p style="${small}">${escapeHtml(model.why)}${
		unsubscribeUrl === null
			? ''
			: ` <a href="${escapeHtml(unsubscribeUrl)}" style="color:${MUTED}">No more letters of this kind</a>`
	}</p></td></tr>
</table>
</td></tr></table>
</body>
</html>
`;
}

function htmlPart(part: LetterPart, paragraph: string, small: string): string {
	if (part.kind === 'text') return `<p style="${paragraph}">${escapeHtml(part.text)}</p>`;
	if (part.kind === 'list') {
		const items = part.items.map((item) => `<li style="margin:0 0 8px">${escapeHtml(item)}</li>`).join('');
		return `<ol style="margin:0 0 14px;padding:0 0 0 22px;font:400 16px/1.5 ${SANS};color:${INK}">${items}</ol>`;
	}
	const lines = escapeHtml(part.text).replaceAll(/\r\n|\r|\n/g, '<br>');
	return `<blockquote style="margin:0 0 14px;padding:2px 0 2px 14px;border-left:2px solid ${PLUM};font:italic 430 18px/1.45 ${SERIF};color:${PLUM}">${lines}</blockquote>
<p style="${small}">${escapeHtml(part.by)}</p>`;
}
