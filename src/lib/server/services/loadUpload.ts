import type { Knex } from 'knex';
import { z } from 'zod';
import { warningSchema } from '../../schemas/analysisDocument.ts';
import { uploadRunSchema, type UploadHead, type UploadRun, type UploadView } from '../../schemas/views.ts';
import { US_PER_S } from '../../units.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listLapRows } from '../db/lapRepository.ts';
import { listLayoutHeads } from '../db/layoutHeads.ts';
import { encodePublicId } from '../db/publicId.ts';
import {
	findUpload,
	getReading,
	listFoundUploads,
	listRunIds,
	seenUploadRows,
	toUploadHead,
	type UploadReading
} from '../db/uploadRepository.ts';
import { notFound } from '../http/notFound.ts';
import { findRemembered, shareableWith } from '../upload/rememberedMappings.ts';
import { absentChannels } from './absentChannels.ts';
import { loadArchiveFiles } from './loadArchiveFiles.ts';

/** How far an upload is: cheap, for it is asked again and again. */
export async function loadUploadHead(viewer: Viewer, uploadId: string): Promise<UploadHead> {
	const db = database();
	const upload = (await findUpload(db, viewer, uploadId)) ?? notFound();
	const runIds = await listRunIds(db, [upload.id]);
	return toUploadHead(upload, runIds.get(upload.id) ?? []);
}

const MOST_UPLOADS = 50;

/** The viewer's last uploads, newest first. */
export async function loadUploads(viewer: Viewer): Promise<UploadHead[]> {
	const db = database();
	const uploads = await listFoundUploads(
		seenUploadRows(db, viewer)
			.where('uploads.owner_id', viewer.personId)
			.orderBy('uploads.created_at', 'desc')
			.limit(MOST_UPLOADS)
	);
	const runIds = await listRunIds(
		db,
		uploads.map(({ id }) => id)
	);
	return uploads.map((upload) => toUploadHead(upload, runIds.get(upload.id) ?? []));
}

/**
 * One upload: what was understood of the file, and the runs that it holds.
 *
 * @throws 404 when there is no such upload, or the viewer may not see it
 */
export async function loadUpload(viewer: Viewer, uploadId: string): Promise<UploadView> {
	const db = database();
	const upload = (await findUpload(db, viewer, uploadId)) ?? notFound();
	const [about, runs] = await Promise.all([
		getReading(db, upload.id),
		listUploadRuns(db, viewer, upload.id, upload.created_at)
	]);
	const { understood } = about;
	const [remembered, files] = await Promise.all([
		loadRemembered(db, viewer, upload.owner_id, about),
		loadArchiveFiles(db, about.archive_files ?? [])
	]);
	return {
		...toUploadHead(
			upload,
			runs.map(({ id }) => id)
		),
		sha256: upload.sha256?.toString('hex') ?? null,
		mapping: about.mapping,
		remembered,
		shareableWith: shareableWith(viewer),
		files,
		understood,
		absent: understood ? absentChannels(understood) : [],
		runs
	};
}

async function loadRemembered(
	db: Knex,
	viewer: Viewer,
	ownerId: number,
	about: UploadReading
): Promise<UploadView['remembered']> {
	if (!about.header_key) return null;
	const kept = await findRemembered(db, { ...viewer, personId: ownerId }, about.header_key);
	return kept && { scope: kept.scope, used: about.remembered_mapping_used === 1, mayForget: kept.mayForget };
}

const runRowSchema = z.object({
	id: z.number(),
	public_id: z.instanceof(Buffer),
	layout_id: z.number(),
	started_at: z.date().nullable(),
	theoretical_best_us: z.number().nullable(),
	best_lap_public_id: z.instanceof(Buffer).nullable(),
	car_public_id: z.instanceof(Buffer).nullable(),
	car_name: z.string().nullable(),
	layout_created_at: z.date(),
	warnings: z.array(warningSchema),
	speed_strip: uploadRunSchema.shape.speedStrip
});

async function listUploadRuns(db: Knex, viewer: Viewer, uploadId: number, uploadedAt: Date): Promise<UploadRun[]> {
	const found: unknown = await db('runs')
		.join('layouts', 'layouts.id', 'runs.layout_id')
		.join('analyses', 'analyses.id', 'runs.analysis_id')
		.leftJoin('cars', 'cars.id', 'runs.car_id')
		.leftJoin('laps', 'laps.id', 'runs.best_lap_id')
		.where('runs.upload_id', uploadId)
		.whereNull('runs.deleted_at')
		.orderBy('runs.run_index')
		.select(
			'runs.id',
			'runs.public_id',
			'runs.layout_id',
			'runs.started_at',
			'runs.theoretical_best_us',
			'analyses.warnings',
			'analyses.speed_strip',
			{
				best_lap_public_id: 'laps.public_id',
				car_public_id: 'cars.public_id',
				car_name: 'cars.name',
				layout_created_at: 'layouts.created_at'
			}
		);
	const rows = z.array(runRowSchema).parse(found);
	const [layouts, laps] = await Promise.all([
		listLayoutHeads(
			db,
			viewer,
			rows.map(({ layout_id }) => layout_id)
		),
		listLapRows(
			db,
			rows.map(({ id }) => id)
		)
	]);
	return rows.map((row) => ({
		id: encodePublicId(row.public_id),
		layout: layouts.get(row.layout_id) ?? notFound(),
		layoutKnown: row.layout_created_at < uploadedAt,
		car:
			row.car_public_id && row.car_name !== null ? { id: encodePublicId(row.car_public_id), name: row.car_name } : null,
		startedAt: row.started_at?.toISOString() ?? null,
		laps: laps.get(row.id) ?? [],
		bestLapId: row.best_lap_public_id && encodePublicId(row.best_lap_public_id),
		theoreticalBestS: row.theoretical_best_us === null ? null : row.theoretical_best_us / US_PER_S,
		warnings: row.warnings,
		speedStrip: row.speed_strip
	}));
}
