import { capitalise, countOf } from '../../../lib/format/count.ts';
import { formatSize } from '../../../lib/format/size.ts';
import type { UploadHead } from '../../../lib/schemas/views.ts';
import type { UploadProblem } from '../../../lib/state/transfer.ts';
import type { UploadPhase } from '../../../lib/state/UploadRow.svelte.ts';
import { describeUpload, placeOf } from '../../../lib/texts/uploads.ts';

/** Of a row, what its sentence is about. */
export interface ToldRow {
	phase: UploadPhase;
	sentBytes: number;
	sizeBytes: number;
	file: File | null;
	head: UploadHead | null;
	problem: UploadProblem | null;
	knownBefore: boolean;
}

/** "12.4 of 48.2 MB". */
function shareText({ sentBytes, sizeBytes }: ToldRow) {
	return `${formatSize(sentBytes)} of ${formatSize(sizeBytes)}`;
}

/** Where a file stands, as one sentence without its full stop. */
export function rowText(row: ToldRow): string {
	switch (row.phase) {
		case 'waiting':
			return 'Waits for the file before it';
		case 'sending':
			return `On its way, ${shareText(row)}`;
		case 'cut':
			return `The connection is gone at ${shareText(row)}; it goes on by itself when it is back`;
		case 'paused':
			return `Paused at ${shareText(row)}`;
		case 'elsewhere':
			return `${formatSize(row.sentBytes)} of ${formatSize(row.sizeBytes)} are here. If nothing else is sending it, choose the same file again: the rest follows`;
		case 'failed':
			return capitalise(row.problem?.message ?? 'The file did not arrive');
		case 'arrived':
			return arrivedText(row);
	}
}

function arrivedText({ head, knownBefore }: ToldRow) {
	if (head === null) return 'Here';
	if (knownBefore) return `This file was here before, so it was not taken twice: ${describeUpload(head)}`;
	if (head.state === 'analysed' && head.kind === 'file') {
		return head.runIds.length === 0 ? 'Understood' : `Understood: ${countOf(head.runIds.length, 'run')}`;
	}
	if (head.state === 'refused' && head.error !== null) {
		const place = placeOf(head.error);
		return `Refused: ${head.error.message}${place === '' ? '' : ` (${place})`}`;
	}
	return capitalise(describeUpload(head));
}

/** What to do about it; null where nothing is to be done. */
export function rowRemedy({ problem, head, phase }: ToldRow): string | null {
	const text = phase === 'failed' ? problem?.remedy : head?.state === 'refused' ? head.error?.remedy : undefined;
	return text === undefined || text === '' ? null : `${capitalise(text.replace(/\.$/, ''))}.`;
}

/** Sending is the first third of the way as a person feels it, reading the rest. */
export function rowShare({ phase, sentBytes, sizeBytes, head }: ToldRow): number {
	if (phase === 'arrived') return 1 / 3 + ((head?.progress ?? 0) * 2) / 3;
	return sizeBytes > 0 ? sentBytes / sizeBytes / 3 : 0;
}
