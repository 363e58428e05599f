import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { rm } from 'node:fs/promises';
import { Readable } from 'node:stream';
import {
	AbortMultipartUploadCommand,
	CompleteMultipartUploadCommand,
	CreateMultipartUploadCommand,
	DeleteObjectCommand,
	GetObjectCommand,
	HeadObjectCommand,
	ListMultipartUploadsCommand,
	ListObjectsV2Command,
	PutObjectCommand,
	S3Client,
	UploadPartCommand,
	type CompletedPart
} from '@aws-sdk/client-s3';
import { FileMissing, FileTooLarge, type KeptFile, type RawStore } from './rawStore.ts';

export interface S3Place {
	endpoint: string;
	bucket: string;
	region: string;
	key: string;
	secret: string;
	/** bytes of a part; the protocol asks for at least 5 MiB of all but the last */
	partBytes?: number;
}

const PART_BYTES = 8 << 20;
/** With the client's own pauses between them. */
const TRIES = 5;

/**
 * Raw files in a bucket that speaks the S3 protocol. An object is there whole or not at all: small ones go in one request, larger
 * ones in parts that count with the last request alone.
 */
export class S3RawStore implements RawStore {
	readonly #client: S3Client;
	readonly #bucket: string;
	readonly #partBytes: number;

	constructor(place: S3Place) {
		this.#bucket = place.bucket;
		this.#partBytes = place.partBytes ?? PART_BYTES;
		this.#client = new S3Client({
			endpoint: place.endpoint,
			region: place.region,
			credentials: { accessKeyId: place.key, secretAccessKey: place.secret },
			forcePathStyle: true,
			maxAttempts: TRIES,
			// Otherwise bodies are framed in a way that stores other than the first one keep as content.
			requestChecksumCalculation: 'WHEN_REQUIRED',
			responseChecksumValidation: 'WHEN_REQUIRED'
		});
	}

	async write(key: string, source: AsyncIterable<Uint8Array>, limitBytes: number): Promise<KeptFile> {
		const hash = createHash('sha256');
		let sizeBytes = 0;
		const parts = new PartWriter(this.#client, this.#bucket, key);
		let held: Uint8Array[] = [];
		let heldBytes = 0;
		try {
			for await (const chunk of source) {
				sizeBytes += chunk.length;
				if (sizeBytes > limitBytes) throw new FileTooLarge(limitBytes);
				hash.update(chunk);
				held.push(Uint8Array.from(chunk));
				heldBytes += chunk.length;
				if (heldBytes < this.#partBytes) continue;
				await parts.add(Buffer.concat(held, heldBytes));
				held = [];
				heldBytes = 0;
			}
			await parts.end(Buffer.concat(held, heldBytes));
		} catch (error) {
			await parts.abort();
			throw error;
		}
		return { sizeBytes, sha256: hash.digest() };
	}

	async adopt(key: string, path: string): Promise<KeptFile> {
		const kept = await this.write(key, createReadStream(path, { highWaterMark: 1 << 20 }), Infinity);
		await rm(path, { force: true });
		return kept;
	}

	async read(key: string): Promise<Readable> {
		try {
			const { Body } = await this.#client.send(new GetObjectCommand({ Bucket: this.#bucket, Key: key }));
			if (Body instanceof Readable) return Body;
			throw new TypeError('a raw file requires a stream of Node');
		} catch (error) {
			throw isMissing(error) ? new FileMissing(key) : error;
		}
	}

	async has(key: string): Promise<boolean> {
		try {
			await this.#client.send(new HeadObjectCommand({ Bucket: this.#bucket, Key: key }));
			return true;
		} catch (error) {
			if (isMissing(error)) return false;
			throw error;
		}
	}

	async measure(key: string): Promise<KeptFile | null> {
		const hash = createHash('sha256');
		let sizeBytes = 0;
		try {
			for await (const chunk of await this.read(key)) {
				const bytes: Uint8Array = chunk;
				sizeBytes += bytes.length;
				hash.update(bytes);
			}
		} catch (error) {
			if (error instanceof FileMissing) return null;
			throw error;
		}
		return { sizeBytes, sha256: hash.digest() };
	}

	async remove(key: string): Promise<void> {
		await this.#client.send(new DeleteObjectCommand({ Bucket: this.#bucket, Key: key }));
	}

	async removePart(key: string): Promise<void> {
		for await (const { Key, UploadId } of this.#openUploads()) {
			if (Key !== key) continue;
			await this.#client.send(new AbortMultipartUploadCommand({ Bucket: this.#bucket, Key, UploadId }));
		}
	}

	async *list(before: Date): AsyncIterable<{ key: string; whole: boolean }> {
		let token: string | undefined;
		do {
			const page = await this.#client.send(
				new ListObjectsV2Command({ Bucket: this.#bucket, ContinuationToken: token })
			);
			for (const { Key, LastModified } of page.Contents ?? []) {
				if (Key !== undefined && LastModified && LastModified < before) yield { key: Key, whole: true };
			}
			token = page.NextContinuationToken;
		} while (token !== undefined);
		for await (const { Key, Initiated } of this.#openUploads()) {
			if (Key !== undefined && Initiated && Initiated < before) yield { key: Key, whole: false };
		}
	}

	/** Files lie elsewhere. */
	localPath(): null {
		return null;
	}

	/** Ends the connections that the client keeps. */
	close(): void {
		this.#client.destroy();
	}

	async *#openUploads() {
		let keyMarker: string | undefined;
		let uploadMarker: string | undefined;
		do {
			const page = await this.#client.send(
				new ListMultipartUploadsCommand({
					Bucket: this.#bucket,
					KeyMarker: keyMarker,
					UploadIdMarker: uploadMarker
				})
			);
			yield* page.Uploads ?? [];
			keyMarker = page.IsTruncated ? page.NextKeyMarker : undefined;
			uploadMarker = page.NextUploadIdMarker;
		} while (keyMarker !== undefined);
	}
}

/** Writes one object: in a request where it is small, else in parts. */
class PartWriter {
	#uploadId: string | undefined;
	readonly #parts: CompletedPart[] = [];

	constructor(
		private readonly client: S3Client,
		private readonly bucket: string,
		private readonly key: string
	) {}

	async add(body: Buffer): Promise<void> {
		const at = { Bucket: this.bucket, Key: this.key };
		this.#uploadId ??= (await this.client.send(new CreateMultipartUploadCommand(at))).UploadId;
		const number = this.#parts.length + 1;
		const { ETag } = await this.client.send(
			new UploadPartCommand({ ...at, UploadId: this.#uploadId, PartNumber: number, Body: body })
		);
		this.#parts.push({ ETag, PartNumber: number });
	}

	async end(rest: Buffer): Promise<void> {
		const at = { Bucket: this.bucket, Key: this.key };
		if (this.#uploadId === undefined) {
			await this.client.send(new PutObjectCommand({ ...at, Body: rest }));
			return;
		}
		if (rest.length > 0) await this.add(rest);
		await this.client.send(
			new CompleteMultipartUploadCommand({
				...at,
				UploadId: this.#uploadId,
				MultipartUpload: { Parts: this.#parts }
			})
		);
	}

	/** What it has left is found by the sweep where this fails too. */
	async abort(): Promise<void> {
		if (this.#uploadId === undefined) return;
		await this.client
			.send(new AbortMultipartUploadCommand({ Bucket: this.bucket, Key: this.key, UploadId: this.#uploadId }))
			.catch(() => {});
	}
}

function isMissing(error: unknown): boolean {
	return error instanceof Error && (error.name === 'NoSuchKey' || error.name === 'NotFound');
}
