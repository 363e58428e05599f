import type { Knex } from 'knex';
import * as m01 from '../../../../migrations/20261001000001_create_people.ts';
import * as m02 from '../../../../migrations/20261001000002_create_site_operators.ts';
import * as m03 from '../../../../migrations/20261001000003_create_organisations.ts';
import * as m04 from '../../../../migrations/20261001000004_create_memberships.ts';
import * as m05 from '../../../../migrations/20261001000005_create_guardian_links.ts';
import * as m06 from '../../../../migrations/20261001000006_create_circuits.ts';
import * as m07 from '../../../../migrations/20261001000007_create_layouts.ts';
import * as m08 from '../../../../migrations/20261001000008_create_path_versions.ts';
import * as m09 from '../../../../migrations/20261001000009_create_corner_maps.ts';
import * as m10 from '../../../../migrations/20261001000010_create_corners.ts';
import * as m11 from '../../../../migrations/20261001000011_create_corner_places.ts';
import * as m12 from '../../../../migrations/20261001000012_create_cars.ts';
import * as m13 from '../../../../migrations/20261001000013_create_events.ts';
import * as m14 from '../../../../migrations/20261001000014_create_uploads.ts';
import * as m15 from '../../../../migrations/20261001000015_create_runs.ts';
import * as m16 from '../../../../migrations/20261001000016_create_analyses.ts';
import * as m17 from '../../../../migrations/20261001000017_create_laps.ts';
import * as m18 from '../../../../migrations/20261001000018_create_lap_traces.ts';
import * as m19 from '../../../../migrations/20261001000019_create_lap_corner_metrics.ts';
import * as m20 from '../../../../migrations/20261001000020_create_grants.ts';
import * as m21 from '../../../../migrations/20261001000021_create_sign_in_sessions.ts';
import * as m22 from '../../../../migrations/20261001000022_create_api_tokens.ts';
import * as m23 from '../../../../migrations/20261001000023_create_shelf_references.ts';
import * as m24 from '../../../../migrations/20261001000024_create_zone_notes.ts';
import * as m25 from '../../../../migrations/20261001000025_create_focus_points.ts';
import * as m26 from '../../../../migrations/20261001000026_create_jobs.ts';
import * as m27 from '../../../../migrations/20261001000027_create_audit_log.ts';
import * as m28 from '../../../../migrations/20261001000028_create_throttle_counters.ts';
import * as m29 from '../../../../migrations/20261001000029_link_runs_to_analyses.ts';
import * as m30 from '../../../../migrations/20261001000030_link_runs_to_best_laps.ts';
import * as m31 from '../../../../migrations/20261001000031_check_grants_have_one_grantee.ts';
import * as m32 from '../../../../migrations/20261001000032_check_grants_name_their_scope.ts';
import * as m101 from '../../../../migrations/20261201000101_extend_uploads.ts';
import * as m102 from '../../../../migrations/20261201000102_create_locks.ts';
import * as m103 from '../../../../migrations/20261201000103_create_remembered_mappings.ts';
import * as m104 from '../../../../migrations/20261201000104_let_people_choose_layouts_of_runs.ts';
import * as m105 from '../../../../migrations/20261201000105_know_stored_files_again.ts';
import * as m401 from '../../../../migrations/20261201000401_create_zone_note_revisions.ts';
import * as m402 from '../../../../migrations/20261201000402_create_zone_note_replies.ts';
import * as m403 from '../../../../migrations/20261201000403_create_debriefs.ts';
import * as m404 from '../../../../migrations/20261201000404_create_sent_debriefs.ts';
import * as m405 from '../../../../migrations/20261201000405_create_debrief_links.ts';
import * as m406 from '../../../../migrations/20261201000406_create_debrief_replies.ts';
import * as m407 from '../../../../migrations/20261201000407_create_debrief_ticks.ts';
import * as m408 from '../../../../migrations/20261201000408_create_coach_phrases.ts';
import * as m409 from '../../../../migrations/20261201000409_create_in_tray_marks.ts';
import * as m410 from '../../../../migrations/20261201000410_date_focus_points.ts';
import * as m301 from '../../../../migrations/20261201000301_create_mail_log.ts';
import * as m302 from '../../../../migrations/20261201000302_create_mail_choices.ts';
import * as m303 from '../../../../migrations/20261201000303_create_password_resets.ts';
import * as m304 from '../../../../migrations/20261201000304_create_invitations.ts';
import * as m305 from '../../../../migrations/20261201000305_create_guardian_requests.ts';
import * as m306 from '../../../../migrations/20261201000306_create_intakes.ts';
import * as m201 from '../../../../migrations/20261201181001_add_metrics_of_causes.ts';

interface Migration {
	up(knex: Knex): Promise<void>;
}

/**
 * Every schema step, in order. A static list, because neither a bundle nor a test runner can read a folder of TypeScript;
 * the names are what the database remembers, so they never change.
 */
export const migrations: readonly (readonly [name: string, migration: Migration])[] = [
	['20261001000001_create_people.ts', m01],
	['20261001000002_create_site_operators.ts', m02],
	['20261001000003_create_organisations.ts', m03],
	['20261001000004_create_memberships.ts', m04],
	['20261001000005_create_guardian_links.ts', m05],
	['20261001000006_create_circuits.ts', m06],
	['20261001000007_create_layouts.ts', m07],
	['20261001000008_create_path_versions.ts', m08],
	['20261001000009_create_corner_maps.ts', m09],
	['20261001000010_create_corners.ts', m10],
	['20261001000011_create_corner_places.ts', m11],
	['20261001000012_create_cars.ts', m12],
	['20261001000013_create_events.ts', m13],
	['20261001000014_create_uploads.ts', m14],
	['20261001000015_create_runs.ts', m15],
	['20261001000016_create_analyses.ts', m16],
	['20261001000017_create_laps.ts', m17],
	['20261001000018_create_lap_traces.ts', m18],
	['20261001000019_create_lap_corner_metrics.ts', m19],
	['20261001000020_create_grants.ts', m20],
	['20261001000021_create_sign_in_sessions.ts', m21],
	['20261001000022_create_api_tokens.ts', m22],
	['20261001000023_create_shelf_references.ts', m23],
	['20261001000024_create_zone_notes.ts', m24],
	['20261001000025_create_focus_points.ts', m25],
	['20261001000026_create_jobs.ts', m26],
	['20261001000027_create_audit_log.ts', m27],
	['20261001000028_create_throttle_counters.ts', m28],
	['20261001000029_link_runs_to_analyses.ts', m29],
	['20261001000030_link_runs_to_best_laps.ts', m30],
	['20261001000031_check_grants_have_one_grantee.ts', m31],
	['20261001000032_check_grants_name_their_scope.ts', m32],
	['20261201000101_extend_uploads.ts', m101],
	['20261201000102_create_locks.ts', m102],
	['20261201000103_create_remembered_mappings.ts', m103],
	['20261201000104_let_people_choose_layouts_of_runs.ts', m104],
	['20261201000105_know_stored_files_again.ts', m105],
	['20261201000301_create_mail_log.ts', m301],
	['20261201000302_create_mail_choices.ts', m302],
	['20261201000303_create_password_resets.ts', m303],
	['20261201000304_create_invitations.ts', m304],
	['20261201000305_create_guardian_requests.ts', m305],
	['20261201000306_create_intakes.ts', m306],
	['20261201000401_create_zone_note_revisions.ts', m401],
	['20261201000402_create_zone_note_replies.ts', m402],
	['20261201000403_create_debriefs.ts', m403],
	['20261201000404_create_sent_debriefs.ts', m404],
	['20261201000405_create_debrief_links.ts', m405],
	['20261201000406_create_debrief_replies.ts', m406],
	['20261201000407_create_debrief_ticks.ts', m407],
	['20261201000408_create_coach_phrases.ts', m408],
	['20261201000409_create_in_tray_marks.ts', m409],
	['20261201000410_date_focus_points.ts', m410],
	['20261201181001_add_metrics_of_causes.ts', m201]
];

/** The list as Knex wants it. */
export const migrationSource: Knex.MigrationSource<(typeof migrations)[number]> = {
	getMigrations: async () => [...migrations],
	getMigrationName: ([name]) => name,
	getMigration: async ([name, migration]) => ({
		up: migration.up,
		down: async () => {
			throw new Error(`${name} only goes forward`);
		}
	})
};
