import { describe, expect, it } from 'vitest';
import type { ColumnMapping } from '../schemas/columnMapping.ts';
import { readRun } from './readRun.ts';

const FILE = ['time (s),speed (km/h),brake (bar),throttle (%),steer (deg)'].concat(
	Array.from(
		{ length: 60 },
		(_, i) => `${(i / 10).toFixed(1)},${100 + (i % 7)},${i % 5},${(i * 3) % 101},${(i % 9) - 3}`
	)
);
const bytes = new TextEncoder().encode(`${FILE.join('\n')}\n`);

async function columnsOf(...columns: ColumnMapping['columns']) {
	const [run] = await readRun(bytes, { fileName: 'run.csv', mapping: { columns } });
	return run;
}

describe('a column that a person turns round', () => {
	it('has left and right change places where it is signed', async () => {
		const header = 'steer (deg)';
		const as = await columnsOf({ header, channel: 'steering', unit: 'deg' });
		const turned = await columnsOf({ header, channel: 'steering', unit: 'deg', turned: true });
		expect(Array.from(turned.columns.steering ?? [])).toEqual(
			Array.from(as.columns.steering ?? [], (value) => 0 - value)
		);
		expect(turned.source.columns[4]).toMatchObject({ turned: true, min: -5, max: 3 });
		expect(as.source.columns[4].turned).toBeUndefined();
	});

	it('has its ends change places where it is a pedal', async () => {
		const header = 'throttle (%)';
		const as = await columnsOf({ header, channel: 'throttle', unit: '%' });
		const turned = await columnsOf({ header, channel: 'throttle', unit: '%', turned: true });
		const [before, after] = [as.columns.throttle ?? [], turned.columns.throttle ?? []];
		const largest = Math.max(...before);
		const least = Math.min(...before);
		expect(Array.from(after)).toEqual(Array.from(before, (value) => largest + least - value));
	});

	it('leaves other columns as they are', async () => {
		const as = await columnsOf();
		const turned = await columnsOf({ header: 'speed (km/h)', channel: 'speed', unit: 'km/h', turned: true });
		expect(turned.columns.speed).toEqual(as.columns.speed);
		expect(turned.columns.brake).toEqual(as.columns.brake);
	});
});
