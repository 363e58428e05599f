import type { CornerEdit, MapCorner } from '../../schemas/cornerMap.ts';
import type { ReferencePath } from '../model.ts';
import { forwardM, shapeBetween, tightestPlace } from './mapGeometry.ts';
import { numberAndLink } from './numberAndLink.ts';

/** What of a path an edit needs. */
export type MapPath = Pick<ReferencePath, 'lengthM' | 'closed' | 'curvaturePerM' | 'speedKmh'>;

export type EditRefusal = 'unknown_corner' | 'not_neighbours' | 'out_of_order' | 'overlaps' | 'outside' | 'already_so';

/** The edited corners, or which step cannot be done and why. */
export type EditedMap = { corners: MapCorner[] } | { refusal: { step: number; code: EditRefusal; message: string } };

/** A stretch shorter than this holds no corner. */
const LEAST_LENGTH_M = 3;

class Refused extends Error {
	readonly code: EditRefusal;

	constructor(code: EditRefusal, message: string) {
		super(message);
		this.code = code;
	}
}

/**
 * Applies steps of an edit to a corner map, one after the other, then numbers by apex from the line and links anew. Ids and names outlive
 * it: what is split off gets a new id, what is merged goes into the first.
 *
 * @param corners with ids, kinks too, in order of apex; not modified
 * @param newId   gives an id for each corner that is split off
 */
export function editCornerMap(
	corners: readonly MapCorner[],
	edits: readonly CornerEdit[],
	path: MapPath,
	newId: () => string
): EditedMap {
	let now = corners.map((corner) => ({ ...corner }));
	for (const [step, edit] of edits.entries()) {
		try {
			now = sorted(applied(now, edit, path, newId));
		} catch (error) {
			if (!(error instanceof Refused)) throw error;
			return { refusal: { step, code: error.code, message: error.message } };
		}
	}
	return { corners: numberAndLink(now, corners, path) };
}

function applied(corners: MapCorner[], edit: CornerEdit, path: MapPath, newId: () => string): MapCorner[] {
	switch (edit.kind) {
		case 'split':
			return split(corners, found(corners, edit.corner), edit.atM, path, newId());
		case 'merge':
			return merged(corners, found(corners, edit.first), found(corners, edit.second), path);
		case 'move':
			return moved(corners, found(corners, edit.corner), edit, path);
		case 'name':
			return replaced(corners, { ...found(corners, edit.corner), name: edit.name });
		case 'number': {
			const kink = found(corners, edit.corner);
			if (kink.number !== null) throw new Refused('already_so', `${nameOf(kink)} has a number already`);
			// any number: all are counted anew at the end
			return replaced(corners, { ...kink, number: 0 });
		}
		case 'unnumber': {
			const corner = found(corners, edit.corner);
			if (corner.number === null) throw new Refused('already_so', `${nameOf(corner)} has no number`);
			return replaced(corners, { ...corner, number: null, linkedTo: null });
		}
	}
}

function split(corners: MapCorner[], corner: MapCorner, atM: number, path: MapPath, id: string): MapCorner[] {
	const length = forwardM(corner.startM, corner.endM, path);
	const at = forwardM(corner.startM, atM, path);
	if (!(at >= LEAST_LENGTH_M && at <= length - LEAST_LENGTH_M))
		throw new Refused(
			'outside',
			`${nameOf(corner)} can be split between its start and its end, ${LEAST_LENGTH_M} m from both`
		);
	const apexFirst = forwardM(corner.startM, corner.apexM, path) <= at;
	const part = (startM: number, endM: number, apexes: (number | null)[], keeps: boolean): MapCorner => {
		const held = apexes.find((apex) => apex !== null && forwardM(startM, apex, path) <= forwardM(startM, endM, path));
		return {
			...corner,
			...(keeps ? {} : { id, name: null, linkedTo: null }),
			startM,
			endM,
			apexM: held ?? tightestPlace(startM, endM, path),
			apex2M: null,
			...shapeBetween(startM, endM, path, corner)
		};
	};
	const { startM, endM, apexM, apex2M } = corner;
	const first = part(startM, atM, [apexM, apex2M], apexFirst);
	const second = part(atM, endM, apexFirst ? [apex2M] : [apexM, apex2M], !apexFirst);
	return [...corners.filter((other) => other.id !== corner.id), first, second];
}

function merged(corners: MapCorner[], first: MapCorner, second: MapCorner, path: MapPath): MapCorner[] {
	const rest = corners.filter(({ id, number }) => id !== first.id && id !== second.id && number !== null);
	const span = forwardM(first.startM, second.endM, path);
	const within = (corner: MapCorner) => forwardM(first.startM, corner.apexM, path) < span;
	if (first.id === second.id || !within(first) || !within(second) || rest.some(within) || span > path.lengthM / 2)
		throw new Refused('not_neighbours', `${nameOf(first)} and ${nameOf(second)} do not follow each other`);
	const sameHand = first.direction === second.direction;
	const corner: MapCorner = {
		...first,
		number: first.number ?? second.number,
		name: first.name ?? second.name,
		endM: second.endM,
		apex2M: sameHand ? (second.apex2M ?? second.apexM) : first.apex2M,
		kind: strongest(first.kind, second.kind),
		...shapeBetween(first.startM, second.endM, path, first)
	};
	return [...corners.filter((other) => other.id !== second.id && other.id !== first.id && !within(other)), corner];
}

function moved(
	corners: MapCorner[],
	corner: MapCorner,
	edit: Extract<CornerEdit, { kind: 'move' }>,
	path: MapPath
): MapCorner[] {
	const next: MapCorner = {
		...corner,
		startM: edit.startM ?? corner.startM,
		apexM: edit.apexM ?? corner.apexM,
		apex2M: edit.apex2M === undefined ? corner.apex2M : edit.apex2M,
		endM: edit.endM ?? corner.endM
	};
	const { startM, apexM, apex2M, endM } = next;
	for (const place of [startM, apexM, endM]) {
		if (place >= path.lengthM && (path.closed || place > path.lengthM))
			throw new Refused('outside', `${place} m lies beyond the lap's ${Math.floor(path.lengthM)} m`);
	}
	const length = forwardM(startM, endM, path);
	const apex = forwardM(startM, apexM, path);
	const apex2 = apex2M === null ? apex : forwardM(startM, apex2M, path);
	if (!path.closed && endM < startM) throw new Refused('out_of_order', 'the end lies before the start');
	if (length < LEAST_LENGTH_M || length > path.lengthM / 2 || apex > length || apex2 > length || apex2 < apex)
		throw new Refused('out_of_order', `start, apex and end of ${nameOf(corner)} must follow each other`);
	for (const other of corners) {
		if (other.id === corner.id) continue;
		const reaches = forwardM(startM, other.startM, path) < length - 1e-6;
		const reached = forwardM(other.startM, startM, path) < forwardM(other.startM, other.endM, path) - 1e-6;
		if (reaches || reached) throw new Refused('overlaps', `${nameOf(corner)} would reach into ${nameOf(other)}`);
	}
	return replaced(corners, { ...next, ...shapeBetween(startM, endM, path, corner) });
}

function found(corners: readonly MapCorner[], id: string): MapCorner {
	const corner = corners.find((one) => one.id === id);
	if (!corner) throw new Refused('unknown_corner', 'there is no such corner in this version of the map');
	return corner;
}

const replaced = (corners: readonly MapCorner[], corner: MapCorner): MapCorner[] =>
	corners.map((other) => (other.id === corner.id ? corner : other));

const sorted = (corners: readonly MapCorner[]): MapCorner[] => corners.toSorted((a, b) => a.apexM - b.apexM);

function nameOf({ name, number, apexM }: MapCorner): string {
	return name ?? (number ? `corner ${number}` : `the bend at ${Math.round(apexM)} m`);
}

function strongest(a: MapCorner['kind'], b: MapCorner['kind']): MapCorner['kind'] {
	return (['braked', 'lifted', 'flat'] as const).find((kind) => a === kind || b === kind) ?? null;
}
