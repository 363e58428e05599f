import { z } from 'zod';

/**
 * Every code that leaves the core, in one place: errors, warnings, findings and reasons are closed unions, so that
 * screens, programs and tests can rely on them. Add a code here first; never reuse one for another meaning.
 */

/** Why a file is refused. */
export const errorCodeSchema = z.enum([
	'empty_file',
	'no_data_rows',
	'too_few_samples',
	'no_header',
	'missing_time',
	'missing_speed',
	'no_movement',
	'not_text',
	'not_csv',
	'not_csv_html',
	'compressed_file',
	'unclosed_quote',
	'too_many_columns',
	'line_too_long',
	'unknown_encoding',
	'time_not_increasing',
	'file_too_large',
	'needs_answer',
	'no_lap',
	'no_such_lap',
	'no_such_run',
	'reference_mismatch',
	'bad_arguments',
	'file_not_found',
	'internal'
]);
export type ErrorCode = z.infer<typeof errorCodeSchema>;

/** What was understood with a reservation. */
export const warningCodeSchema = z.enum([
	'line_chosen',
	'no_complete_lap',
	'no_clean_lap',
	'more_runs',
	'brake_scale_assumed',
	'brake_offset_removed',
	'brake_switch_only',
	'brake_from_deceleration',
	'throttle_inverted',
	'throttle_scaled',
	'speed_unit_assumed',
	'unit_assumed',
	'speed_scale_differs',
	'speed_from_wheel',
	'speed_from_distance',
	'speed_from_positions',
	'speed_negative',
	'negative_speed',
	'direction',
	'frozen_channel',
	'duplicate_column',
	'duplicate_rows',
	'overlap_removed',
	'time_restarts',
	'time_rebuilt',
	'time_jitter',
	'gap',
	'short_row',
	'long_row',
	'bad_cell',
	'footer_ignored',
	'quote_repaired',
	'encoding_assumed',
	'null_bytes_removed',
	'positions_missing',
	'position_jump',
	'lap_column_unused',
	'lap_time_from_samples',
	'speed_only',
	'direction_reversed',
	'path_from_accelerations',
	'channel_lag',
	'metadata'
]);
export type WarningCode = z.infer<typeof warningCodeSchema>;

/** Why a lap is not clean, or what marks it carries. */
export const lapReasonSchema = z.enum([
	'standing_start',
	'pit_lane',
	'stopped',
	'neutralised',
	'short',
	'drop_out',
	'off_path',
	'slow',
	'out_lap',
	'in_lap',
	'partial',
	'time_coarse'
]);
export type LapReason = z.infer<typeof lapReasonSchema>;

/** Why a metric is null or carries a reservation. */
export const metricReasonSchema = z.enum([
	'no_channel',
	'brake_switch',
	'no_brake_here',
	'no_lift_here',
	'flat',
	'never_full',
	'not_released',
	'gap',
	'not_reached',
	'linked',
	'not_linked',
	'partly_lifted',
	'not_turning',
	'no_hold',
	'brake_scale_assumed',
	'from_deceleration',
	'too_coarse'
]);
export type MetricReason = z.infer<typeof metricReasonSchema>;

/** Measured causes. */
export const findingCodeSchema = z.enum([
	'brake_early',
	'brake_late',
	'peak_over',
	'peak_under',
	'harder_no_gain',
	'rise_quick',
	'second_dab',
	'pedal_change_slow',
	'pedal_overlap',
	'release_abrupt',
	'release_long',
	'release_uneven',
	'hold_missing',
	'hold_short',
	'hold_strong',
	'min_speed_low',
	'entry_fast',
	'pick_up_late',
	'pick_up_hesitant',
	'second_lift',
	'lift_extra',
	'coasting',
	'exit_speed_low',
	'wheelspin',
	'scrub',
	'steering_corrections',
	'turn_in_early',
	'turn_in_late',
	'idle_gap',
	'chain_exit_low',
	'lock_up',
	'rear_lock',
	'line',
	'grip_unused',
	'gear_other',
	'short_shift',
	'spread_onset',
	'spread_min_speed',
	'car_or_wind',
	'carried_in'
]);
export type FindingCode = z.infer<typeof findingCodeSchema>;

/** Why drafted advice is not said. */
export const adviceGateSchema = z.enum([
	'open_road',
	'neutralised',
	'saving_fuel',
	'warming_tyres',
	'wet',
	'cold_tyres',
	'first_laps',
	'fade',
	'no_run_off',
	'no_slip_evidence',
	'rear_brakes',
	'rear_locks',
	'beginner',
	'step_too_small'
]);
export type AdviceGate = z.infer<typeof adviceGateSchema>;
