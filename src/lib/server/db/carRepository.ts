import type { Knex } from 'knex';
import type { BrakeUnit } from '../../schemas/channels.ts';
import { newPublicId } from './publicId.ts';

const LONGEST_NAME = 120;

/** What preambles call the car; compared without case. */
const CAR_KEYS = new Set([
	'car',
	'vehicle',
	'vehicle id',
	'vehicle name',
	'fahrzeug',
	'voiture',
	'auto',
	'coche',
	'carro'
]);

/** Name of the car in a file's preamble, or null. */
export function carNameOf(metadata: Readonly<Record<string, string>>): string | null {
	for (const [key, value] of Object.entries(metadata)) {
		const name = value.trim();
		if (CAR_KEYS.has(key.trim().toLowerCase()) && name !== '') return name.slice(0, LONGEST_NAME);
	}
	return null;
}

/** The owner's car of that name; null when there is none. */
export async function findCar(
	db: Knex,
	ownerId: number,
	name: string
): Promise<{ id: number; brake_full: number | null; brake_unit: BrakeUnit | null } | undefined> {
	return await db('cars')
		.where({ owner_id: ownerId, name })
		.orderBy('id')
		.first<{ id: number; brake_full: number | null; brake_unit: BrakeUnit | null } | undefined>(
			'id',
			'brake_full',
			'brake_unit'
		);
}

/** The owner's car of that name, made where there is none. */
export async function findOrMakeCar(trx: Knex.Transaction, ownerId: number, name: string): Promise<number> {
	// Two files of one person that name a new car end at the same time: the second waits here, and then finds it.
	await trx('people').where({ id: ownerId }).forUpdate().first('id');
	const known = await findCar(trx, ownerId, name);
	if (known) return known.id;
	const [id]: number[] = await trx('cars').insert({
		public_id: newPublicId(),
		owner_id: ownerId,
		name: name.slice(0, LONGEST_NAME)
	});
	return id;
}

/** The car that the file's preamble names, made where the owner has none of that name; null when it names none. */
export async function carOfMetadata(
	trx: Knex.Transaction,
	ownerId: number,
	metadata: Readonly<Record<string, string>>
): Promise<number | null> {
	const name = carNameOf(metadata);
	return name === null ? null : await findOrMakeCar(trx, ownerId, name);
}
