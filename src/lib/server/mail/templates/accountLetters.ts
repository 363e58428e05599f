import { formatDay } from '../../../format/date.ts';
import type { Role } from '../../../schemas/views.ts';
import type { MailData } from '../mailKinds.ts';
import { hand, text, type LetterModel } from './letterModel.ts';

const ROLE_TEXT: Record<Role, string> = {
	driver: 'a driver',
	coach: 'a coach',
	manager: 'a manager',
	admin: 'an administrator'
};

const until = (expiresAt: string) => `The link works once, until ${formatDay(expiresAt)}.`;

export function invitationLetter(data: MailData<'invitation'>): LetterModel {
	const { inviter, organisation, role, asksFor, note } = data;
	const asked =
		organisation === null
			? `${inviter} would like to coach you on Kerbnote.`
			: `${inviter} asks you to join ${organisation} as ${ROLE_TEXT[role]}.`;
	const laps =
		asksFor === null
			? []
			: [
					text(
						`${organisation ?? inviter} would like to see ${asksFor}. You choose what they see, and you can take it back at any time.`
					)
				];
	return {
		subject:
			organisation === null ? `${inviter} would like to coach you` : `${inviter} asks you to join ${organisation}`,
		title: organisation === null ? 'A coach asks you in' : 'Your team asks you in',
		parts: [text(asked), ...(note === null ? [] : [hand(note, inviter)]), ...laps],
		action: { label: 'Look at the invitation', path: data.path },
		after: `${until(data.expiresAt)} If you do not know ${inviter}, do nothing: nobody sees anything of yours.`,
		why: `You get this letter because ${inviter} wrote your address into an invitation.`
	};
}

export function guardianConsentLetter({
	minor,
	inviter,
	asksFor,
	path,
	expiresAt
}: MailData<'guardianConsent'>): LetterModel {
	return {
		subject: `${minor} needs you to agree`,
		title: `${minor} needs you to agree`,
		parts: [
			text(
				`${minor} was invited by ${inviter} and said that you are their guardian. An account of somebody under 18 is held by a guardian, who decides what is shared and may end it at any time.`
			),
			text(
				asksFor === null
					? 'Nothing is shared with anybody so far.'
					: `${minor} chose to let ${inviter} see ${asksFor}. That holds only once you agree.`
			)
		],
		action: { label: 'Look at it', path },
		after: `${until(expiresAt)} If you do nothing, the account stays closed.`,
		why: `You get this letter because ${minor} named this address as their guardian’s.`
	};
}

export function passwordResetLetter({ path, validMinutes }: MailData<'passwordReset'>): LetterModel {
	return {
		subject: 'Choose a new password',
		title: 'Choose a new password',
		parts: [text('Somebody, most likely you, asked for a new password for this address.')],
		action: { label: 'Choose a new password', path },
		after: `The link works once, for ${validMinutes} minutes. If it was not you, do nothing: your password stays as it is.`,
		why: 'You get this letter because somebody asked for it with this address.'
	};
}
