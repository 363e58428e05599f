import { mailDataSchemas, type MailInput } from '../mailKinds.ts';
import type { Letter } from '../sealing.ts';
import { guardianConsentLetter, invitationLetter, passwordResetLetter } from './accountLetters.ts';
import { htmlFrame } from './htmlFrame.ts';
import type { LetterModel } from './letterModel.ts';
import { textFrame } from './textFrame.ts';
import {
	debriefSentLetter,
	focusMetLetter,
	replyLetter,
	runAnalysedLetter,
	weeklySummaryLetter
} from './workLetters.ts';

const LONGEST_SUBJECT = 150;

export interface RenderOptions {
	/** scheme and host that links begin with, without a slash at its end */
	origin: string;
	readerName: string | null;
	unsubscribeUrl: string | null;
}

/**
 * A letter of one kind, set as HTML and as text. Its subject is one line without control characters, whatever names are in it.
 *
 * @throws {ZodError} when the data are not those of the kind
 */
export function renderLetter(input: Pick<MailInput, 'kind' | 'data'>, options: RenderOptions): Letter {
	const model = modelOf(input);
	const frame = {
		greeting: options.readerName === null ? null : `Hello ${options.readerName},`,
		actionUrl: options.origin + model.action.path,
		unsubscribeUrl: options.unsubscribeUrl
	};
	const subject = oneLine(model.subject);
	return {
		subject,
		html: htmlFrame({ ...model, subject }, frame),
		text: textFrame(model, frame),
		unsubscribeUrl: options.unsubscribeUrl
	};
}

function oneLine(subject: string): string {
	const line = subject.replaceAll(/[\p{Cc}\p{Zl}\p{Zp}\s]+/gu, ' ').trim();
	return line.length <= LONGEST_SUBJECT ? line : `${line.slice(0, LONGEST_SUBJECT - 1)}…`;
}

function modelOf({ kind, data }: Pick<MailInput, 'kind' | 'data'>): LetterModel {
	switch (kind) {
		case 'invitation':
			return invitationLetter(mailDataSchemas.invitation.parse(data));
		case 'guardianConsent':
			return guardianConsentLetter(mailDataSchemas.guardianConsent.parse(data));
		case 'passwordReset':
			return passwordResetLetter(mailDataSchemas.passwordReset.parse(data));
		case 'runAnalysed':
			return runAnalysedLetter(mailDataSchemas.runAnalysed.parse(data));
		case 'debriefSent':
			return debriefSentLetter(mailDataSchemas.debriefSent.parse(data));
		case 'reply':
			return replyLetter(mailDataSchemas.reply.parse(data));
		case 'focusMet':
			return focusMetLetter(mailDataSchemas.focusMet.parse(data));
		case 'weeklySummary':
			return weeklySummaryLetter(mailDataSchemas.weeklySummary.parse(data));
	}
}
