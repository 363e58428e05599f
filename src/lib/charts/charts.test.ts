import { describe, expect, it } from 'vitest';
import { encodeTraceFrame } from '$lib/analysis/trace/traceFrame';
import type { LapGrid } from '$lib/analysis/model';
import { cornerCard, type CornerCard } from '$lib/view/cornerCard';
import { exampleComparison } from '$lib/view/example/exampleComparison';
import { exampleSource } from './exampleSource';
import { lapTraceSource } from './lapTraceSource';
import { placeOnLap, readAloud, readoutValue } from './readoutText';
import { rowPath, rowViewBox } from './rowPaths';
import { trackPoint, trackPoints } from './trackPoint';

const view = exampleComparison();
const card = cornerCard(view, 4) as CornerCard;
const leaving = new AbortController().signal;

/** The API's answer for a lap, as the server packs it. */
function answer(grid: LapGrid, url: URL): Response {
	const from = Number(url.searchParams.get('from'));
	const to = Number(url.searchParams.get('to'));
	const resolutions = { timeS: 1e6, speedKmh: 100, brakePct: 10, throttlePct: 10, steeringDeg: 10 } as const;
	const columns = Object.entries(resolutions).flatMap(([channel, perUnit]) => {
		const values = grid[channel as keyof typeof resolutions];
		return values
			? [{ channel, unit: '', perUnit, values: values.slice(from + grid.marginM, to + grid.marginM + 1) }]
			: [];
	});
	const header = { lap: 'x', lengthM: grid.lengthM, fromM: from, lapTimeS: grid.lapTimeS };
	return new Response(encodeTraceFrame(header, columns, url.searchParams.get('encoding') === 'packed'));
}

const request: typeof fetch = (input) => {
	const url = new URL(String(input), 'http://localhost');
	return Promise.resolve(answer(url.pathname.includes('/mine/') ? view.driverGrid : view.referenceGrid, url));
};

describe('lapTraceSource', () => {
	const pair = { driver: 'mine', reference: 'theirs', brakeScale: { driver: 1, reference: 1 } };

	it('reads from the API what the grids hold, to the resolution that is stored', async () => {
		const [fetched, held] = await Promise.all([
			lapTraceSource(pair, card, request).load(leaving),
			exampleSource(view, card).load(leaving)
		]);
		for (const side of ['driver', 'reference'] as const)
			for (const key of ['brake', 'speed', 'throttle', 'steering'] as const)
				held[side][key]?.forEach((value, i) => expect(fetched[side][key]?.[i]).toBeCloseTo(value, 0.9));
		held.deltaS.forEach((value, i) => {
			if (Number.isNaN(value)) expect(fetched.deltaS[i]).toBeNaN();
			else expect(Math.abs(fetched.deltaS[i] - value)).toBeLessThan(3e-6);
		});
	});

	it('ends at the ledger’s total where the span ends', async () => {
		const { deltaS } = await lapTraceSource(pair, card, request).load(leaving);
		const end = Math.round(card.delta.toM) - card.window.fromM;
		expect(deltaS[end]).toBeCloseTo(card.gap.deltaS, 2);
	});

	it('puts each brake column on the scale of the comparison', async () => {
		const half = { ...pair, brakeScale: { driver: 0.5, reference: 1 } };
		const [plain, scaled] = await Promise.all([pair, half].map((p) => lapTraceSource(p, card, request).load(leaving)));
		expect(scaled.driver.brake?.[40]).toBeCloseTo((plain.driver.brake?.[40] ?? NaN) / 2, 6);
		expect(scaled.reference.brake?.[40]).toBe(plain.reference.brake?.[40]);
	});

	it('is null for a channel that the lap does not carry', async () => {
		const bare: typeof fetch = (input) =>
			Promise.resolve(answer({ ...view.driverGrid, brakePct: null }, new URL(String(input), 'http://localhost')));
		const traces = await lapTraceSource(pair, card, bare).load(leaving);
		expect(traces.driver.brake).toBeNull();
	});

	it('fetches the run’s further laps only when they are asked for, on the driver’s scale of brake', async () => {
		const asked: string[] = [];
		const counting: typeof fetch = (input) => {
			asked.push(String(input));
			return request(input);
		};
		const others = [{ id: 'mine', number: 3 }];
		const source = lapTraceSource({ ...pair, brakeScale: { driver: 0.5, reference: 1 }, others }, card, counting);
		expect(source.others?.numbers).toEqual([3]);
		const { driver } = await source.load(leaving);
		expect(asked).toHaveLength(2);
		const laps = await source.others?.load(leaving);
		expect(asked).toHaveLength(3);
		expect(laps?.[0].number).toBe(3);
		expect(laps?.[0].columns.brake).toEqual(driver.brake);
	});

	it('refuses an answer that is none', async () => {
		const refused: typeof fetch = () => Promise.resolve(new Response('', { status: 404 }));
		await expect(lapTraceSource(pair, card, refused).load(leaving)).rejects.toThrow(/got 404/);
	});
});

describe('trackPoint', () => {
	const points = trackPoints([100, 200, 20, -10, null, null, 0, -40, 10, 0]);
	const track = { fromM: 50, stepM: 2 };

	it('is linear between the points of the track', () => {
		expect(trackPoint(track, points, 51)).toMatchObject({ x: 11, y: 19.5 });
	});
	it('is null in a gap and before the track', () => {
		expect(trackPoint(track, points, 53)).toBeNull();
		expect(trackPoint(track, points, 55)).toBeNull();
		expect(trackPoint(track, points, 49)).toBeNull();
	});
	it('goes on after a gap from where the line was', () => {
		expect(trackPoint(track, points, 56)).toMatchObject({ x: 12, y: 15 });
		expect(trackPoint(track, points, 58)).toMatchObject({ x: 13, y: 15 });
	});
	it('knows the direction, for the line across', () => {
		const at = trackPoint(track, points, 58);
		expect([at?.directionX, at?.directionY]).toEqual([1, 0]);
	});
});

describe('rowPath', () => {
	const row = { domain: [0, 100] as [number, number], heightPx: 100 };

	it('draws a range of the values across the whole width', () => {
		const ramp = Array.from({ length: 101 }, (_, i) => i);
		expect(rowPath(ramp, 400, { fromM: 400, toM: 500 }, row)).toBe('M0 1000l10000-1000');
		expect(rowPath(ramp, 400, { fromM: 450, toM: 500 }, row)).toBe('M0 500l10000-500');
	});
	it('is empty for an absent channel', () => {
		expect(rowPath(null, 400, { fromM: 400, toM: 500 }, row)).toBe('');
	});
	it('shows a piece of a drawing as wide as the window through its box', () => {
		expect(rowViewBox({ fromM: 450, toM: 475 }, { fromM: 400, toM: 500 }, 56)).toBe('5000 0 2500 560');
	});
});

describe('read-outs', () => {
	it('count places from the line again', () => {
		expect(placeOnLap(-20, 3621, true)).toBe(3601);
		expect(placeOnLap(3650, 3621, true)).toBe(29);
		expect(placeOnLap(-20, 3621, false)).toBe(-20);
	});
	it('leave a dash in a gap', () => {
		expect(readoutValue({ valueUnit: '%' }, null)).toBe('–');
		expect(readoutValue({ valueUnit: '%' }, 93.4)).toBe('93\u00a0%');
	});
	it('are spoken row by row, without rows that have nothing', () => {
		const said = readAloud(card.rows, card.cursor, card.lengthM, true);
		expect(said).toMatch(
			/^384\u00a0m; brake \d+\u00a0%, reference \d+\u00a0%; speed .+; throttle .+; steering .+; time /
		);
		expect(readAloud([], card.cursor, card.lengthM, true)).toMatch(/^384\u00a0m; time /);
	});
});
