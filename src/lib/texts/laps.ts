import type { LapKind } from '../schemas/analysisDocument.ts';
import type { LapReason } from '../schemas/codes.ts';

export const LAP_KIND_TEXT: Record<LapKind, string> = {
	out: 'out lap',
	timed: 'timed',
	in: 'in lap',
	partial: 'part of a lap'
};

/** Why a lap is not clean, or what it carries; null where the kind already says it. */
const LAP_REASON_TEXT: Record<LapReason, string | null> = {
	standing_start: 'standing start',
	pit_lane: 'through the pit lane',
	stopped: 'stopped on the way',
	neutralised: 'neutralised',
	short: 'shorter than the layout',
	drop_out: 'drop-out in the recording',
	off_path: 'left the circuit',
	slow: 'slow lap',
	out_lap: null,
	in_lap: null,
	partial: null,
	time_coarse: 'time as coarse as the samples'
};

export interface LapJudgement {
	kind: LapKind;
	clean: boolean;
	reasons: readonly LapReason[];
}

/**
 * A lap's kind and whether it counts, in words: "timed, clean", "timed, left the circuit", "out lap".
 * A clean lap may still carry a mark, which is said after it.
 */
export function describeLap({ kind, clean, reasons }: LapJudgement) {
	const said = reasons.map((reason) => LAP_REASON_TEXT[reason]).filter((text) => text !== null);
	const parts = [LAP_KIND_TEXT[kind], ...(kind === 'timed' && clean ? ['clean'] : []), ...said];
	if (kind === 'timed' && !clean && said.length === 0) parts.push('not clean');
	return parts.join(', ');
}
