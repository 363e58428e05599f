import { capitalise } from '../format/count.ts';
import type { Warning } from '../schemas/analysisDocument.ts';
import type { WarningCode } from '../schemas/codes.ts';

/**
 * What a reservation means for what is read afterwards; null where the message says it all.
 * The message tells what was found in this file, this tells what follows.
 */
const CONSEQUENCE: Record<WarningCode, string | null> = {
	line_chosen:
		'Laps compare with each other as they should; their times are from this line, not from the circuit’s own.',
	no_complete_lap: 'There is nothing to compare yet; record at least one lap from line to line.',
	no_clean_lap: 'The fastest timed lap stands in for it.',
	more_runs: null,
	brake_scale_assumed: 'Per cent of brake are of this value, and nothing is said about too much pressure.',
	brake_offset_removed: null,
	brake_switch_only: 'We can say where braking begins and ends, not how hard it is.',
	brake_from_deceleration: 'Places of braking are less sharp than from a brake channel.',
	throttle_inverted: null,
	throttle_scaled: null,
	speed_unit_assumed: 'If speeds look wrong, the unit in the header is the place to say so.',
	unit_assumed: null,
	speed_scale_differs: null,
	speed_from_wheel: 'A locking or spinning wheel shows in it.',
	speed_from_distance: null,
	speed_from_positions: 'Minimum speeds are smoother than the car’s own sensor would show.',
	speed_negative: null,
	negative_speed: null,
	direction: null,
	frozen_channel: null,
	duplicate_column: null,
	duplicate_rows: null,
	overlap_removed: null,
	time_restarts: null,
	time_rebuilt: null,
	time_jitter: null,
	gap: 'What falls into it is not judged.',
	short_row: null,
	long_row: null,
	bad_cell: null,
	footer_ignored: null,
	quote_repaired: null,
	encoding_assumed: null,
	null_bytes_removed: null,
	positions_missing: null,
	position_jump: null,
	lap_column_unused: null,
	lap_time_from_samples: 'Lap times are only as fine as the samples.',
	speed_only: 'Corners are found from speed alone: places and names may need a look.',
	direction_reversed: 'It is kept apart from runs in the other direction.',
	path_from_accelerations: 'The drawn line is an estimate.',
	channel_lag: 'Pedals and steering were on another clock than the reference’s; they were moved by the lag found.',
	metadata: null
};

/** A reservation as full sentences: what was found, and what follows from it. */
export function warningText({ code, message }: Pick<Warning, 'code' | 'message'>) {
	const sentence = capitalise(message.trim().replace(/[.!]$/, ''));
	const consequence = CONSEQUENCE[code];
	return consequence === null ? `${sentence}.` : `${sentence}. ${consequence}`;
}
