import type { FullThrottleModel } from '../../analysis/car/fullThrottle.ts';
import type { ReferencePath } from '../../analysis/model.ts';
import type { AnalysisDocument, Cell, Corner } from '../../schemas/analysisDocument.ts';
import type { BrakeUnit } from '../../schemas/channels.ts';
import type { ColumnMapping } from '../../schemas/columnMapping.ts';
import type { UploadStage } from '../../schemas/views.ts';

/** What passes between the job worker, which knows the database, and the thread that reads and analyses, which knows none. */

export interface ImportRequest {
	/** of the raw file on this machine */
	path: string;
	sizeBytes: number;
	fileName: string;
	mapping: ColumnMapping | null;
	/** is there any answer about columns that may be remembered for this file's header */
	looksForMapping: boolean;
}

/** What a run says of the circuit that it was driven on; candidates are looked up by it. */
export interface LayoutFingerprint {
	/** of one lap; null where the run holds no whole lap */
	lengthM: number | null;
	/** where on earth; null without positions on earth */
	centre: { latitudeDeg: number; longitudeDeg: number } | null;
	origin: ReferencePath['origin'];
}

/** A stored layout that the run may have been driven on. */
export interface LayoutCandidate {
	layoutId: number;
	pathVersion: number;
	mapVersion: number;
	path: ReferencePath;
	corners: Corner[];
	cells: Cell[];
	/** a person says that it was this one: no likeness is asked for */
	chosen?: boolean;
}

/** What is known of the brake of the car that the file names. */
export interface KnownBrake {
	unit: BrakeUnit;
	/** what 100 % stands for */
	full: number;
}

/** From the thread; it waits for an answer to each but the first kind. */
export type ImportReport =
	| { kind: 'progress'; stage: UploadStage; progress: number; rowsRead: number }
	| { kind: 'mapping'; headers: string[] }
	| { kind: 'brake'; metadata: Record<string, string> }
	| { kind: 'candidates'; fingerprint: LayoutFingerprint; runIndex: number };

/** One channel of a lap, ready for the table `lap_traces`. */
export interface TraceColumn {
	channel: string;
	version: number;
	scale: number;
	payload: Uint8Array;
}

export interface AnalysedLap {
	/** as in the document */
	number: number;
	/** null for a lap that is not laid on the grid */
	grid: { lengthM: number; marginM: number; columns: TraceColumn[] } | null;
}

/** One run of the file, ready to be stored. */
export interface AnalysedRun {
	document: Omit<AnalysisDocument, 'path' | 'comparison'>;
	/** the known layout that the run lies on, else a new one's path, else the 0-based run of this file whose new one it is */
	layout:
		| { known: Pick<LayoutCandidate, 'layoutId' | 'pathVersion' | 'mapVersion'> }
		| { path: ReferencePath }
		| { sameAs: number };
	laps: AnalysedLap[];
	fullThrottle: FullThrottleModel | null;
	brake: { unit: BrakeUnit | null; full: number | null; scaleAssumed: boolean };
	/** channels that the run carries */
	channels: string[];
	speedStrip: { durationS: number; lowKmh: (number | null)[]; highKmh: (number | null)[] };
	startedAtMs: number | null;
}
