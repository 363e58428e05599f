import type { Knex } from 'knex';
import type { ReferencePath } from '../../analysis/model.ts';
import type { Cell } from '../../schemas/analysisDocument.ts';
import type { CornerView, LayoutHead } from '../../schemas/views.ts';
import type { Viewer } from '../access/viewer.ts';
import { listLayoutHeads } from '../db/layoutHeads.ts';
import { getCornerMap, getPath, type LayoutVersion } from '../db/layoutRepository.ts';
import { ContentCache } from './contentCache.ts';

/** A version of a layout under its names of the moment: the same for everybody who may see it. */
export interface LayoutSheet {
	/** what hashes of answers take from here */
	key: string;
	/** who may rename it depends on the viewer, and is not part of the sheet */
	head: Omit<LayoutHead, 'mayEdit'>;
	corners: CornerView[];
	cells: Cell[];
	/** read when it is first asked for */
	path(): Promise<ReferencePath>;
}

const KEPT_SHEETS = 60;
const sheets = new ContentCache<LayoutSheet>(KEPT_SHEETS);

/**
 * @param namedAt when a name on it was last changed: together with the versions it says all that the sheet depends on
 * @throws {Error} when there is no such version
 */
export async function getLayoutSheet(
	db: Knex,
	viewer: Viewer,
	version: LayoutVersion,
	namedAt: readonly Date[]
): Promise<LayoutSheet> {
	const { layoutId, pathVersion, mapVersion } = version;
	const key = [layoutId, pathVersion, mapVersion, ...namedAt.map((time) => time.getTime())].join(':');
	const known = sheets.get(key);
	if (known) return known;
	const [heads, map] = await Promise.all([listLayoutHeads(db, viewer, [layoutId]), getCornerMap(db, version)]);
	const found = heads.get(layoutId);
	if (!found) throw new Error(`getLayoutSheet requires a stored layout, got ${layoutId}`);
	const { id, name, circuit, lengthM, cornerCount, outline } = found;
	let path: Promise<ReferencePath> | undefined;
	const sheet: LayoutSheet = {
		key,
		head: { id, name, circuit, lengthM, cornerCount, outline },
		corners: map.corners.map(({ corner }) => corner),
		cells: map.cells,
		path: () => (path ??= getPath(db, version))
	};
	sheets.set(key, sheet);
	return sheet;
}
