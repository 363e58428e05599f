import type { Knex } from 'knex';
import { database } from '../../db/database.ts';
import { encodePublicId } from '../../db/publicId.ts';
import {
	foundUploadRows,
	listFoundUploads,
	listRunIds,
	toUploadHead,
	type FoundUpload
} from '../../db/uploadRepository.ts';
import { faultOf, logger } from '../../logger.ts';

export interface UploadEvent {
	kind: 'upload' | 'gone';
	/** an upload's head; of one that is gone, its id */
	json: string;
}

export interface UploadListener {
	/** whose uploads are of interest */
	owners: readonly number[];
	send(event: UploadEvent): void;
	/** the server stops */
	end(): void;
}

const POLL_MS = 300;
/** A change is written with the time of its statement and seen with the end of its transaction; none lasts longer than this. */
const LOOK_BACK_S = 10;
const OPEN_STATES = ['receiving', 'stored', 'reading', 'needs_answer'];
const MOST_OPEN = 500;

/**
 * What changes about uploads, told to everybody who listens on this node. Nodes and workers share nothing but the database, so it
 * is asked; one question for all listeners together, and none while nobody listens.
 */
export class UploadFeed {
	readonly #db: Knex;
	/** what each listener was told last of each upload */
	readonly #told = new Map<UploadListener, Map<number, string>>();
	#timer: NodeJS.Timeout | undefined;
	#ended = false;

	constructor(db: Knex) {
		this.#db = db;
	}

	/** @returns leaves again */
	subscribe(listener: UploadListener): () => void {
		if (this.#ended) {
			queueMicrotask(() => listener.end());
			return () => {};
		}
		this.#told.set(listener, new Map());
		void this.#tellOpen(listener);
		this.#timer ??= setTimeout(() => void this.#poll(), POLL_MS);
		return () => void this.#told.delete(listener);
	}

	/** Ends every stream, and refuses new ones: the server stops, and an open stream would keep it. */
	end(): void {
		this.#ended = true;
		clearTimeout(this.#timer);
		for (const listener of [...this.#told.keys()]) listener.end();
		this.#told.clear();
	}

	async #poll(): Promise<void> {
		try {
			const owners = [...new Set([...this.#told.keys()].flatMap((listener) => listener.owners))];
			if (owners.length > 0) {
				const query = foundUploadRows(this.#db)
					.whereIn('uploads.owner_id', owners)
					.whereRaw('uploads.updated_at > CURRENT_TIMESTAMP(3) - INTERVAL ? SECOND', [LOOK_BACK_S]);
				await this.#tell(query, [...this.#told.keys()]);
			}
		} catch (error) {
			logger.debug(faultOf(error), 'changes of uploads could not be read');
		}
		this.#timer = this.#told.size > 0 && !this.#ended ? setTimeout(() => void this.#poll(), POLL_MS) : undefined;
	}

	async #tellOpen(listener: UploadListener): Promise<void> {
		try {
			const query = foundUploadRows(this.#db)
				.whereIn('uploads.owner_id', listener.owners)
				.whereIn('uploads.state', OPEN_STATES)
				.whereNull('uploads.deleted_at')
				.orderBy('uploads.created_at', 'desc')
				.limit(MOST_OPEN);
			await this.#tell(query, [listener]);
		} catch (error) {
			logger.debug(faultOf(error), 'open uploads could not be read');
		}
	}

	async #tell(query: Knex.QueryBuilder, listeners: readonly UploadListener[]): Promise<void> {
		const uploads = await listFoundUploads(query);
		if (uploads.length === 0) return;
		const runIds = await listRunIds(
			this.#db,
			uploads.map(({ id }) => id)
		);
		const events = uploads.map((upload) => ({ upload, ...eventOf(upload, runIds.get(upload.id) ?? []) }));
		for (const listener of listeners) {
			const told = this.#told.get(listener);
			for (const { upload, kind, json } of events) {
				if (!told || !listener.owners.includes(upload.owner_id)) continue;
				if (told.get(upload.id) === json || (kind === 'gone' && !told.has(upload.id))) continue;
				told.set(upload.id, json);
				listener.send({ kind, json });
			}
		}
	}
}

function eventOf(upload: FoundUpload, runIds: string[]): UploadEvent {
	if (upload.deleted_at) return { kind: 'gone', json: JSON.stringify({ id: encodePublicId(upload.public_id) }) };
	return { kind: 'upload', json: JSON.stringify(toUploadHead(upload, runIds)) };
}

let shared: UploadFeed | undefined;

/** The feed of this process. */
export function uploadFeed(): UploadFeed {
	return (shared ??= new UploadFeed(database()));
}
