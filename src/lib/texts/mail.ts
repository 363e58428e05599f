/** What the letters that a person may do without are called. */
export const OPTIONAL_MAIL_TEXT = {
	runAnalysed: 'a run was read',
	debriefSent: 'your coach wrote a debrief',
	reply: 'somebody answered a note or a debrief',
	focusMet: 'a focus was met',
	weeklySummary: 'the week in a few lines'
} as const;
