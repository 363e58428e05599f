import type { FrameOptions } from './htmlFrame.ts';
import type { LetterModel, LetterPart } from './letterModel.ts';

/** The same letter as plain text, for those who read it so. */
export function textFrame(model: LetterModel, { greeting, actionUrl, unsubscribeUrl }: FrameOptions): string {
	const blocks = [
		model.title,
		greeting,
		...model.parts.map(textPart),
		`${model.action.label}:\n${actionUrl}`,
		model.after,
		// "-- " and a line end begin a signature (RFC 3676, 4.3).
		`-- \nKerbnote\n${model.why}`,
		unsubscribeUrl && `No more letters of this kind:\n${unsubscribeUrl}`
	];
	return blocks.filter((block) => block !== null).join('\n\n') + '\n';
}

function textPart(part: LetterPart): string {
	if (part.kind === 'text') return part.text;
	if (part.kind === 'list') return part.items.map((item, i) => `${i + 1}. ${item}`).join('\n');
	const quoted = part.text
		.split(/\r\n|\r|\n/)
		.map((line) => `> ${line}`)
		.join('\n');
	return `${quoted}\n(${part.by})`;
}
