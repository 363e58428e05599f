import { createHash } from 'node:crypto';
import type { Knex } from 'knex';
import type { Warning } from '../../schemas/analysisDocument.ts';
import type { Fairness, LapHead, LayoutHead } from '../../schemas/views.ts';
import type { Viewer } from '../access/viewer.ts';
import { toLapHead } from '../db/lapRepository.ts';
import { findPairLaps, type PairLap } from '../db/pairRepository.ts';
import { decodePublicId } from '../db/publicId.ts';
import { conflict } from '../http/conflict.ts';
import { notFound } from '../http/notFound.ts';
import { CODE_VERSION } from '../importing/storeRun.ts';
import { getLayoutSheet, type LayoutSheet } from './layoutSheet.ts';

/** Two laps that may be laid on each other, before they are. */
export interface LapPair {
	driver: PairLap;
	reference: PairLap;
	sheet: LayoutSheet;
	/** what stands beside them; `hash` covers all of it */
	heads: { driver: LapHead; reference: LapHead; layout: LayoutHead; fairness: Fairness[]; warnings: Warning[] };
	/** SHA-256, hex, of everything that the answer to this viewer depends on */
	hash: string;
}

/**
 * @throws 404 when one of the laps does not exist or the viewer may not see it; 409 when they lie on different layouts, or on
 *   versions of a layout that cannot be laid on each other
 */
export async function loadPair(db: Knex, viewer: Viewer, lapId: string, referenceId: string): Promise<LapPair> {
	const [lapKey, referenceKey] = [decodePublicId(lapId) ?? notFound(), decodePublicId(referenceId) ?? notFound()];
	const laps = await findPairLaps(db, viewer, [lapKey, referenceKey]);
	const driver = laps.find(({ lap_public_id }) => lap_public_id.equals(lapKey));
	const reference = laps.find(({ lap_public_id }) => lap_public_id.equals(referenceKey));
	if (!driver || !reference) notFound();
	const version = versionOf(driver);
	const other = versionOf(reference);
	if (version.layoutId !== other.layoutId) conflict('different_layout', 'These laps were driven on different layouts.');
	if (version.pathVersion !== other.pathVersion || version.mapVersion !== other.mapVersion) {
		conflict('different_layout', 'One of these laps waits to be read again on the newer map of its layout.');
	}
	const sheet = await getLayoutSheet(db, viewer, version, [driver.layout_named_at, driver.circuit_named_at]);
	const heads = {
		driver: toLapHead(driver, viewer),
		reference: toLapHead(reference, viewer),
		layout: { ...sheet.head, mayEdit: driver.may_edit === 1 },
		fairness: fairnessOf(driver, reference),
		warnings: driver.warnings
	};
	const content = [
		CODE_VERSION,
		sheet.key,
		driver.analysis_id,
		reference.analysis_id,
		heads.layout.mayEdit,
		heads.driver,
		heads.reference
	];
	return { driver, reference, sheet, heads, hash: createHash('sha256').update(JSON.stringify(content)).digest('hex') };
}

function versionOf({ layout_id, path_version, map_version }: PairLap) {
	return { layoutId: layout_id, pathVersion: path_version, mapVersion: map_version };
}

/** What a reader must know before trusting the pair. */
function fairnessOf(driver: PairLap, reference: PairLap): Fairness[] {
	const notes: Fairness[] = [];
	if (driver.run_id !== reference.run_id) {
		if (driver.car_id === null || reference.car_id === null) notes.push('car_unknown');
		else if (driver.car_name !== reference.car_name) notes.push('other_car');
		if (driver.conditions === 'unknown' || reference.conditions === 'unknown') notes.push('conditions_unknown');
		else if (driver.conditions !== reference.conditions) notes.push('other_conditions');
		const bothPlaced = driver.place !== 'unknown' && reference.place !== 'unknown';
		if (bothPlaced && driver.place !== reference.place) notes.push('other_place');
	}
	if (driver.is_clean !== 1) notes.push('driver_lap_not_clean');
	if (reference.is_clean !== 1) notes.push('reference_not_clean');
	return notes;
}
