import { describe, expect, it } from 'vitest';
import { readDescription, readNames } from './runForms.ts';

const form = (fields: Record<string, string>) => {
	const data = new FormData();
	for (const [name, value] of Object.entries(fields)) data.set(name, value);
	return data;
};

describe('readDescription', () => {
	it('takes what was chosen and written; empty is none', () => {
		expect(
			readDescription(
				form({ place: 'real', conditions: 'damp', intent: 'pace', car: ' Brindle GT ', tyreSet: '', fuelKg: '38,5' })
			)
		).toEqual({
			value: { place: 'real', conditions: 'damp', intent: 'pace', car: 'Brindle GT', tyreSet: null, fuelKg: 38.5 },
			issues: null
		});
	});

	it.each([
		{
			fields: { fuelKg: 'half' } as Record<string, string>,
			field: 'fuelKg',
			says: 'Write the fuel in kg, as a number'
		},
		{ fields: { tyreSet: 'x'.repeat(61) }, field: 'tyreSet', says: 'A name has at most 60 characters' }
	])('refuses $fields where it was written', ({ fields, field, says }) => {
		expect(readDescription(form(fields)).issues).toEqual({ [field]: [says] });
	});

	it('refuses an answer that the form does not offer', () => {
		expect(readDescription(form({ place: 'moon' })).issues).toHaveProperty('place');
	});
});

describe('readNames', () => {
	const id = 'a'.repeat(26);

	it('collects the corners by their ids', () => {
		expect(
			readNames(form({ circuitName: 'Vallmere Park', layoutName: 'short', [`corner:${id}`]: ' Weir ' })).value
		).toEqual({
			circuitName: 'Vallmere Park',
			layoutName: 'short',
			corners: { [id]: 'Weir' }
		});
	});

	it('says at the field what is wrong', () => {
		const { issues } = readNames(form({ circuitName: '', layoutName: 'short', [`corner:${id}`]: 'x'.repeat(61) }));
		expect(issues).toEqual({
			circuitName: ['Write a name'],
			[`corner:${id}`]: ['A name has at most 60 characters']
		});
	});
});
