import type { UploadHead } from '../schemas/views.ts';

/** Why a file is not here, and what to do. */
export interface UploadProblem {
	message: string;
	remedy: string;
	/** may the same file simply be sent again */
	again: boolean;
}

/** Thrown by what asks the server, for what a person can read. */
export class UploadFault extends Error {
	constructor(readonly problem: UploadProblem) {
		super(problem.message);
		this.name = 'UploadFault';
	}
}

export const LINE_BROKEN: UploadProblem = {
	message: 'The file did not arrive',
	remedy: 'Check the connection and send it again; it goes on where it stopped',
	again: true
};

/** What becomes of a file on its way. */
export interface TransferEvents {
	/** the server knows of it */
	oncreated: (id: string) => void;
	/** bytes that left, those of an earlier try counted in */
	onprogress: (sentBytes: number) => void;
	/** the line broke; the transfer tries again by itself */
	oncut: () => void;
	/** all of it is there; `id` is that of the earlier upload where the same file was here before */
	onarrived: (answer: { id: string; knownBefore: boolean }) => void;
	onfault: (problem: UploadProblem) => void;
}

/** One file that goes, stops and goes on where it stopped. */
export interface Transfer {
	start: () => void;
	/** keeps on the server what has arrived */
	pause: () => Promise<void>;
	/** takes from the server what has arrived */
	giveUp: () => Promise<void>;
}

/** What the server says about uploads by itself. */
export interface UploadListener {
	onhead: (head: UploadHead) => void;
	/** it was deleted, here or elsewhere */
	ongone: (id: string) => void;
	/** the line stands (again): what was said meanwhile is not known */
	onopen: () => void;
}

/** The server, as the queue sees it. */
export interface UploadDoor {
	open: (file: File, events: TransferEvents) => Transfer;
	/** how far the import is */
	ask: (id: string, signal: AbortSignal) => Promise<UploadHead>;
	/** takes an upload out of sight, or gives an unfinished one up */
	remove: (id: string, how: 'delete' | 'give_up') => Promise<void>;
	/** undoes `remove` with `delete` */
	restore: (id: string) => Promise<UploadHead>;
	/** hears what becomes of uploads; returns how to stop */
	listen: (listener: UploadListener) => () => void;
	/** files that are kept in the browser until they have arrived, for a page that is loaded anew */
	kept: KeptFiles;
}

export interface KeptFiles {
	keep: (file: File) => Promise<void>;
	drop: (file: File) => Promise<void>;
	/** those that no other tab is sending */
	list: () => Promise<File[]>;
}
