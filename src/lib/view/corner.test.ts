import { describe, expect, it } from 'vitest';
import { exampleComparison } from './example/exampleComparison.ts';
import { cornerWindow } from './cornerWindow.ts';
import { cornerCall, cornerFacts, cornerInWords, cornerName } from './cornerTitle.ts';
import { deltaDomain, deltaRow } from './deltaRow.ts';
import { deltaAt, gridValue, metresBetween } from './gridValue.ts';
import { nearestTurn, placedCorner } from './placedCorner.ts';
import { rankText } from './rankText.ts';
import { rulerTicks, rulerView } from './rulerView.ts';
import { splitView } from './splitView.ts';
import { fewTicks, missingText, rowScale, traceRows } from './traceRows.ts';

const typical = exampleComparison();
const spanning = exampleComparison({ lineAtM: 505 });
const margins = { marginM: typical.driverGrid.marginM, lengthM: typical.path.lengthM };

function placed(view = typical, corner = 4) {
	const places = placedCorner(view, corner);
	if (!places) throw new Error('the example requires this corner');
	return places;
}

describe('nearestTurn', () => {
	it.each([
		{ name: 'a place before the line, seen from after it', placeM: 3600, aroundM: 10, expected: -21 },
		{ name: 'a place after the line, seen from before it', placeM: 15, aroundM: 3600, expected: 3636 },
		{ name: 'a place on the same side', placeM: 400, aroundM: 500, expected: 400 }
	])('puts $name next to it', ({ placeM, aroundM, expected }) => {
		expect(nearestTurn(placeM, aroundM, 3621)).toBe(expected);
	});
	it('never wraps an open course', () => expect(nearestTurn(3600, 10, 3621, false)).toBe(3600));
});

describe('placedCorner', () => {
	it('makes one stretch of a corner that spans the line', () => {
		const places = placed(spanning, 1);
		expect(places.startM).toBeLessThan(0);
		expect(places.endM).toBeGreaterThan(0);
		expect(places.beginM).toBeLessThan(places.startM);
		expect(places.driver?.onsetM).toBeLessThan(places.apexM);
	});
	it('is null for a corner that the layout does not have', () => expect(placedCorner(typical, 99)).toBeNull());
});

describe('cornerWindow', () => {
	it('begins 16 m before the earlier onset and ends 6 m after the span', () => {
		const places = placed();
		const window = cornerWindow(places, margins);
		expect(window.fromM).toBe(Math.floor(places.beginM - 16));
		expect(window.toM).toBe(Math.ceil(places.spans.endM + 6));
		expect(window.exitGoesOnToM).toBeNull();
	});
	it('cuts a longer exit at 260 m and says how far it goes on', () => {
		const places = placed(typical, 8);
		const window = cornerWindow(places, margins);
		expect(window.toM - window.fromM).toBe(260);
		expect(window.exitGoesOnToM).toBe(Math.round(places.spans.endM));
	});
	it('never cuts before the corner ends', () => {
		const places = {
			...placed(),
			endM: placed().beginM + 400,
			spans: { ...placed().spans, endM: placed().beginM + 900 }
		};
		const window = cornerWindow(places, margins);
		expect(window.toM).toBe(Math.ceil(places.endM + 20));
	});
	it('stays where the grids know something', () => {
		const places = { ...placed(), beginM: -400 };
		expect(cornerWindow(places, margins).fromM).toBe(1 - margins.marginM);
	});
});

describe('gridValue', () => {
	it('is linear between whole metres and NaN outside', () => {
		const grid = typical.driverGrid;
		const [low, high] = [gridValue(grid, 'speedKmh', 100), gridValue(grid, 'speedKmh', 101)];
		expect(gridValue(grid, 'speedKmh', 100.25)).toBeCloseTo(low + (high - low) / 4, 9);
		expect(gridValue(grid, 'speedKmh', -251)).toBeNaN();
		expect(gridValue(grid, 'speedKmh', 9999)).toBeNaN();
	});
	it('is NaN where the channel is absent', () => {
		expect(gridValue({ ...typical.driverGrid, brakePct: null }, 'brakePct', 100)).toBeNaN();
	});
	it('counts whole metres with both ends', () => {
		expect(metresBetween(-1.5, 2)).toEqual([-1, 0, 1, 2]);
		expect(metresBetween(2, 1)).toEqual([]);
	});
});

describe('rowScale', () => {
	it.each([
		{ key: 'brake', values: [], domain: [0, 100], ticks: ['0', '50', '100'] },
		{ key: 'throttle', values: [3], domain: [0, 100], ticks: ['0', '100'] },
		{ key: 'speed', values: [57.2, 162.9], domain: [55, 165], ticks: ['80', '120', '160'] },
		{ key: 'speed', values: [101, 101], domain: [100, 105], ticks: ['100', '105'] },
		{ key: 'speed', values: [], domain: [0, 100], ticks: ['0', '50', '100'] },
		{ key: 'steering', values: [-104, 8], domain: [-120, 30], ticks: ['0', '−120'] },
		{ key: 'steering', values: [], domain: [-30, 30], ticks: ['0'] }
	] as const)('scales $key of $values to $domain', ({ key, values, domain, ticks }) => {
		const scale = rowScale(key, [...values]);
		expect(scale.domain).toEqual(domain);
		expect(scale.ticks.map((tick) => tick.text)).toEqual(ticks);
	});
	it('puts at most three ticks on any speed', () => {
		for (let low = 0; low < 200; low += 5)
			for (let high = low + 5; high < 360; high += 5) {
				const ticks = fewTicks([low, high]);
				expect(ticks.length).toBeGreaterThan(0);
				expect(ticks.length).toBeLessThanOrEqual(3);
			}
	});
});

describe('traceRows', () => {
	const input = {
		driver: typical.driverGrid,
		reference: typical.referenceGrid,
		fromM: 368,
		toM: 615,
		speedUnit: 'kmh'
	} as const;

	it('draws brake, speed, throttle, and steering where a file has it', () => {
		expect(traceRows(input).map((row) => row.key)).toEqual(['brake', 'speed', 'throttle', 'steering']);
		const without = {
			...input,
			driver: { ...input.driver, steeringDeg: null },
			reference: { ...input.reference, steeringDeg: null }
		};
		expect(traceRows(without).map((row) => row.key)).toEqual(['brake', 'speed', 'throttle']);
	});
	it('keeps the row of a missing channel and says whose file lacks it', () => {
		const [brake] = traceRows({ ...input, driver: { ...input.driver, brakePct: null } });
		expect(brake.driver).toBe('');
		expect(brake.reference).not.toBe('');
		expect(brake.missing).toBe('No brake channel in this file');
		expect(missingText('brake', false, true)).toBe('No brake channel in the reference’s file');
		expect(missingText('brake', true, true)).toBe('No brake channel in either file');
		expect(missingText('brake', false, false)).toBeNull();
	});
	it('draws speed in the reader’s unit', () => {
		const [, speed] = traceRows({ ...input, speedUnit: 'mph' });
		expect(speed.unit).toBe('mph');
		expect(speed.domain[1]).toBeLessThan(110);
	});
});

describe('deltaRow', () => {
	const places = placed();
	const span: [number, number] = [places.spans.entryM, places.spans.endM];
	const row = deltaRow({
		driver: typical.driverGrid,
		reference: typical.referenceGrid,
		windowM: [368, 615],
		spanM: span,
		domain: [-0.1, 0.34]
	});

	it('ends at what the ledger says of the corner', () => {
		expect(row.end.deltaS).toBeCloseTo(places.ledger.totalS, 9);
		expect(row.end.text).toMatch(/^\+\d\.\d{3}\u00a0s\u00a0lost$/);
	});
	it('draws only the side that there is', () => {
		expect(row.lostClip).toMatch(/^polygon\(/);
		expect(row.foundClip).toBeNull();
	});
	it('has nothing to draw of a lap with itself', () => {
		const same = deltaRow({
			driver: typical.driverGrid,
			reference: typical.driverGrid,
			windowM: [368, 615],
			spanM: span,
			domain: [0, 0.1]
		});
		expect([same.lostClip, same.foundClip, same.end.word]).toEqual([null, null, 'level']);
	});
	it('stops before a drop-out', () => {
		const timeS = typical.driverGrid.timeS.map((t, i) => (i > 250 + 450 ? NaN : t));
		const cut = deltaRow({
			driver: { ...typical.driverGrid, timeS },
			reference: typical.referenceGrid,
			windowM: [368, 615],
			spanM: span,
			domain: [0, 0.3]
		});
		expect(cut.toM).toBe(450);
		expect(cut.line).not.toMatch(/NaN/);
	});
	it('shares one scale between corners, never less than a tenth', () => {
		const [low, high] = deltaDomain(typical.driverGrid, typical.referenceGrid, [span]);
		expect(low).toBe(0);
		expect(high).toBeGreaterThanOrEqual(places.ledger.totalS);
		expect(deltaDomain(typical.driverGrid, typical.driverGrid, [span])).toEqual([0, 0.1]);
	});
});

describe('splitView', () => {
	it('carries the ledger’s numbers at their true distance', () => {
		const places = placed();
		const parts = splitView(places, cornerWindow(places, margins), null);
		expect(parts.map((part) => part.name)).toEqual(['entry', 'mid', 'exit']);
		expect(parts.reduce((sum, part) => sum + part.deltaS, 0)).toBeCloseTo(places.ledger.totalS, 9);
		expect(parts[0].toM).toBe(parts[1].fromM);
	});
	it('leaves out a part without length and says where a cut exit goes on', () => {
		const places = placed(spanning, 1);
		const parts = splitView(places, cornerWindow(places, margins), 898);
		expect(parts[0].name).toBe('mid');
		expect(parts[parts.length - 1].goesOn).toBe('on to 898\u00a0m');
	});
});

describe('rulerView', () => {
	it('counts from each crossing of the line, so that numbers stay round', () => {
		const ticks = rulerTicks({ fromM: -140, toM: 120, lengthM: 3621, closed: true });
		expect(ticks.every((tick) => tick.onLapM % 5 === 0)).toBe(true);
		const { labels } = rulerView({ fromM: -140, toM: 120, lengthM: 3621, closed: true, marks: [] });
		expect(labels.map((label) => label.text)).toEqual([
			'3\u00a0500',
			'3\u00a0550',
			'3\u00a0600',
			'0',
			'50',
			'100\u00a0m'
		]);
	});
	it('lets later names give way to earlier ones where there is no room', () => {
		const { marks } = rulerView({
			fromM: 0,
			toM: 250,
			lengthM: 3621,
			closed: true,
			marks: [
				{ atM: 100, name: 'apex' },
				{ atM: 92, name: 'turn-in' },
				{ atM: 122, name: 'corner end' },
				{ atM: null, name: 'nowhere' }
			]
		});
		expect(marks.map(({ name, roomWide, roomNarrow }) => [name, roomWide, roomNarrow])).toEqual([
			['turn-in', false, false],
			['apex', true, true],
			['corner end', true, false]
		]);
	});
	it('numbers a kart’s short window more closely', () => {
		const { labels } = rulerView({ fromM: 10, toM: 90, lengthM: 900, closed: true, marks: [] });
		expect(labels.map((label) => label.text)).toEqual(['20', '40', '60', '80\u00a0m']);
	});
});

describe('cornerTitle', () => {
	const corner = typical.corners[3];
	it('names a corner, and says what kind it is where nobody has named it', () => {
		expect([cornerName(corner), cornerCall(corner), cornerInWords(corner)]).toEqual([
			'Tern Hairpin',
			'4\u00a0Tern Hairpin',
			'Tern Hairpin'
		]);
		const nameless = { ...corner, name: null };
		expect([cornerName(nameless), cornerCall(nameless), cornerInWords(nameless)]).toEqual([
			'Right-hander',
			'corner\u00a04',
			'corner\u00a04'
		]);
		expect(cornerName({ ...nameless, direction: null })).toBe('Corner');
	});
	it('says what is known of the shape, and nothing of what is not', () => {
		expect(cornerFacts(corner, typical.corners)).toBe('right · 143° · R\u00a018\u00a0m');
		expect(cornerFacts(typical.corners[0], typical.corners)).toContain('leads on to 2\u00a0Sallow');
		expect(cornerFacts({ ...corner, direction: null, angleDeg: null, minRadiusM: null }, [])).toBe('');
	});
});

describe('rankText', () => {
	it('says the rank and the share, in words', () => {
		expect(rankText(typical.comparison, 8)).toMatch(
			/^the most expensive of twelve corners: 0\.3\d\d of 1\.0\d\d\u00a0s$/
		);
		expect(rankText(typical.comparison, 11)).toBe('the best of twelve corners');
	});
	it('claims no share where the corner costs more than the gap', () => {
		expect(rankText({ ...typical.comparison, deltaS: 0.05 }, 8)).toBe('the most expensive of twelve corners');
	});
	it('ranks nothing of a lap with itself', () => {
		expect(rankText(exampleComparison({ sameLap: true }).comparison, 4)).toBe('as quick as the reference here');
	});
});

describe('deltaAt', () => {
	it('is 0 at the line and the gap at its end', () => {
		expect(deltaAt(typical.driverGrid, typical.referenceGrid, 0)).toBe(0);
		expect(deltaAt(typical.driverGrid, typical.referenceGrid, typical.path.lengthM)).toBeCloseTo(
			typical.comparison.deltaS,
			9
		);
	});
});
