import { describe, expect, it } from 'vitest';
import type { Comparison, Finding, LedgerRow } from '../schemas/analysisDocument.ts';
import { findingCodeSchema } from '../schemas/codes.ts';
import type { ComparisonView } from '../schemas/views.ts';
import { exampleComparison } from './example/exampleComparison.ts';
import { costText, findingLines, groupDigits, habitText, orderedFindings } from './findingLines.ts';
import { clause, gapInWords } from './gapInWords.ts';
import { driverLabel, referenceLabel } from './lapLabels.ts';
import { numbersTable } from './numbersTable.ts';
import { placedCorner } from './placedCorner.ts';
import { samplesTable } from './samplesTable.ts';

const typical = exampleComparison();

/** A comparison with these totals by corner; corner 0 is the run-up. */
function ledgerOf(totals: Record<number, number>, findings: Finding[] = [], own = true): ComparisonView {
	const ledger = Object.entries(totals).map(([corner, totalS]): LedgerRow => ({
		corner: Number(corner),
		entryS: totalS,
		midS: 0,
		exitS: 0,
		straightS: 0,
		totalS,
		entryM: 0,
		midM: 0,
		exitM: 0,
		endM: 0
	}));
	const deltaS = ledger.reduce((sum, row) => sum + row.totalS, 0);
	const comparison: Comparison = { ...typical.comparison, ledger, findings, deltaS };
	return { ...typical, comparison, driver: { ...typical.driver, own } };
}

function finding(changes: Partial<Finding> = {}): Finding {
	return {
		corner: 4,
		code: 'brake_early',
		costS: 0.12,
		plusMinusS: 0.01,
		habit: null,
		habitLaps: null,
		shares: [{ corner: 4, costS: 0.12 }],
		evidence: [{ quantity: 'onset', unit: 'm', driver: 412, reference: 424, atM: 412, plusMinus: 1 }],
		text: '',
		...changes
	};
}

describe('gapInWords', () => {
	it.each([
		{
			name: 'the corners that hold most of the gap, the one to begin with, and where the driver is quicker',
			view: ledgerOf({ 0: 0, 4: 0.312, 8: 0.257, 6: 0.191, 10: 0.178, 9: 0.164, 12: 0.146, 2: 0.14, 5: -0.029 }, [
				finding()
			]),
			said: [
				'Four corners hold 69\u00a0% of it: 4, 8, 6 and 10.',
				'Begin at Tern Hairpin, where the brake comes 12\u00a0m early.',
				'At Weir you are quicker than the reference.'
			]
		},
		{
			name: 'more than the whole gap where other corners win time back',
			view: ledgerOf({ 4: 0.3, 5: -0.2 }),
			said: [
				'One corner costs 0.300\u00a0s, more than the whole gap: 4.',
				'Begin at Tern Hairpin: 0.300\u00a0s lost, without a single cause.',
				'At Weir you are quicker than the reference.'
			]
		},
		{
			name: 'a quicker driver who still loses somewhere',
			view: ledgerOf({ 4: -0.3, 5: 0.1 }),
			said: [
				'You are quicker than the reference.',
				'There is still time at Weir: 0.100\u00a0s lost, without a single cause.'
			]
		},
		{
			name: 'two laps that are one',
			view: ledgerOf({ 4: 0.004, 5: -0.003 }),
			said: ['The two laps take the same time, corner by corner.']
		},
		{
			name: 'the same time in other corners',
			view: ledgerOf({ 4: 0.2, 5: -0.195 }),
			said: [
				'The two laps take the same time, but not in the same corners.',
				'There is still time at Tern Hairpin: 0.200\u00a0s lost, without a single cause.'
			]
		},
		{
			name: 'what the lap before left',
			view: ledgerOf({ 0: 0.2, 4: 0.1 }),
			said: [
				'More than half of it was brought along from the last corner of the lap before.',
				'Begin at Tern Hairpin: 0.100\u00a0s lost, without a single cause.'
			]
		}
	])('says $name', ({ view, said }) => expect(gapInWords(view).sentences).toEqual(said));

	it('speaks of the driver by name to somebody else', () => {
		expect(gapInWords(ledgerOf({ 4: 0.3, 5: -0.1 }, [], false)).sentences[2]).toBe(
			'At Weir Mira is quicker than the reference.'
		);
		expect(gapInWords(ledgerOf({ 4: -0.3 }, [], false)).sentences[0]).toBe(
			'Mira Tansley is quicker than the reference.'
		);
	});
	it('names a second cause only where it costs a good part of the first', () => {
		const second = (costS: number) =>
			gapInWords(
				ledgerOf({ 4: 0.3, 8: 0.1 }, [
					finding(),
					finding({ code: 'pick_up_late', costS, shares: [{ corner: 4, costS }] })
				])
			).sentences[1];
		expect(second(0.08)).toBe(
			'Begin at Tern Hairpin, where the brake comes 12\u00a0m early and the throttle comes 12\u00a0m late.'
		);
		expect(second(0.02)).toBe('Begin at Tern Hairpin, where the brake comes 12\u00a0m early.');
	});
	it('has a clause without an instruction for every code, or none', () => {
		for (const code of findingCodeSchema.options) {
			const said = clause(finding({ code }));
			if (said !== null) expect(said).toMatch(/^(the|there|a) /);
			expect(said ?? '').not.toMatch(/should|must|\btry\b|brake later/);
		}
	});
});

describe('findingLines', () => {
	it('puts what is told and the rest to the corner’s total, but for what is too little to tell', () => {
		for (const row of typical.comparison.ledger.filter((r) => r.corner > 0)) {
			const { told, smaller } = orderedFindings(typical.comparison, row.corner);
			const said = [...told, ...smaller].reduce((sum, { shareS }) => sum + shareS, 0);
			const rest = typical.comparison.unexplained.find((u) => u.corner === row.corner)?.costS ?? NaN;
			expect(Math.abs(said + rest - row.totalS)).toBeLessThan(0.02);
		}
	});
	it('numbers what is measured here, and gives no ring to what is carried in', () => {
		const comparison = ledgerOf({ 4: 0.3 }, [
			finding({
				code: 'carried_in',
				costS: 0.2,
				shares: [],
				evidence: [{ quantity: 'fromCorner', unit: '', driver: 2, reference: null, atM: 400, plusMinus: null }]
			}),
			finding(),
			finding({ code: 'peak_over', costS: 0, shares: [] })
		]).comparison;
		const { lines } = findingLines(comparison, 4);
		expect(lines.map(({ code, number, cost }) => [code, number, cost?.text ?? null])).toEqual([
			['carried_in', null, 'about\u00a00.20\u00a0s\u00a0lost'],
			['brake_early', 1, 'about\u00a00.12\u00a0s\u00a0lost'],
			['peak_over', 2, null]
		]);
	});
	it('sums up what is too small for a line, and tells five at most', () => {
		const small = [0.012, 0.009, -0.004].map((costS) =>
			finding({ code: 'coasting', costS, shares: [{ corner: 4, costS }] })
		);
		const { lines, smaller } = findingLines(ledgerOf({ 4: 0.3 }, [finding(), ...small]).comparison, 4);
		expect(lines).toHaveLength(2);
		expect(smaller).toEqual({
			text: 'Two smaller causes together',
			cost: { text: 'about\u00a00.02\u00a0s\u00a0lost', word: 'lost' }
		});
		const many = findingLines(
			ledgerOf(
				{ 4: 0.3 },
				Array.from({ length: 9 }, () => finding())
			).comparison,
			4
		);
		expect(many.lines).toHaveLength(5);
		expect(many.smaller?.text).toBe('Four smaller causes together');
	});
	it('marks the reference’s value and says what is carried on', () => {
		const comparison = ledgerOf({ 4: 0.3 }, [
			finding({
				costS: 0.2,
				shares: [
					{ corner: 4, costS: 0.12 },
					{ corner: 5, costS: 0.08 }
				]
			})
		]).comparison;
		const [line] = findingLines(comparison, 4).lines;
		expect(line.segments.filter((part) => part.isReference).map((part) => part.text)).toEqual(['424\u00a0m']);
		expect(line.carriedOn).toBe('another 0.08\u00a0s carried on');
	});
	it.each([
		{ costS: 0.123, text: 'about\u00a00.12\u00a0s\u00a0lost' },
		{ costS: -0.047, text: 'about\u00a00.05\u00a0s\u00a0found' },
		{ costS: 0.002, text: 'no time' }
	])('says $costS s as "$text"', ({ costS, text }) => expect(costText(costS).text).toBe(text));
	it.each([
		{ habit: true, shown: 6, text: 'habit, 6 of 7\u00a0laps' },
		{ habit: false, shown: 1, text: 'one-off, 1 of 7\u00a0laps' },
		{ habit: false, shown: 3, text: '3 of 7\u00a0laps' }
	])('calls $shown of 7 laps "$text"', ({ habit, shown, text }) => {
		expect(habitText({ habit, habitLaps: { shown, of: 7 } })?.text).toBe(text);
	});
	it('says nothing of habits after too few laps', () => expect(habitText({ habit: null, habitLaps: null })).toBeNull());
	it('groups digits as the rest of the page does', () => {
		expect(groupDigits('at 1506 m, not 92.1234 m')).toBe('at 1\u00a0506 m, not 92.1234 m');
	});
});

describe('lap labels', () => {
	const { driver, reference } = typical;
	const now = new Date('2026-06-01T00:00:00Z');
	it('call a lap by number, and a reference by day', () => {
		expect(driverLabel(driver).which).toBe('lap\u00a06');
		expect(referenceLabel(reference, driver, { now }).which).toBe('3\u00a0May');
	});
	it('call a lap of the same run so, and an own lap of another day by both', () => {
		expect(referenceLabel({ ...reference, runId: driver.runId }, driver).which).toBe('lap\u00a03 of the same run');
		expect(referenceLabel({ ...reference, driver: driver.driver }, driver, { now }).which).toBe(
			'3\u00a0May, lap\u00a03'
		);
		expect(referenceLabel({ ...reference, startedAt: null }, driver).which).toBe('lap\u00a03');
	});
	it('say what must stand beside a time', () => {
		expect(driverLabel(driver).state).toBe('clean, dry, Brindle GT');
		expect(driverLabel({ ...driver, clean: false, conditions: 'unknown', place: 'simulator', car: null }).state).toBe(
			'not clean, simulator'
		);
	});
});

describe('tables', () => {
	const places = placedCorner(typical, 4);
	if (!places) throw new Error('the example requires corner 4');
	const common = { places, lengthM: typical.path.lengthM, closed: true, speedUnit: 'kmh' } as const;

	it('set both laps’ measures side by side', () => {
		const rows = numbersTable({ ...common, mainOnly: true });
		expect(rows.find((row) => row.key === 'onsetM')).toMatchObject({
			driver: '384\u00a0m',
			reference: '393\u00a0m',
			difference: '−9\u00a0m'
		});
		expect(rows.length).toBeLessThan(numbersTable(common).length);
	});
	it('call what lies within the ± the same', () => {
		const driver = places.driver && { ...places.driver, plusMinus: { onsetM: 10 } };
		const rows = numbersTable({ ...common, places: { ...places, driver } });
		expect(rows.find((row) => row.key === 'onsetM')?.difference).toBe('same');
	});
	it('say why there is no number', () => {
		const driver = places.driver && { ...places.driver, peakPct: null, reasons: { peakPct: 'no_brake_here' as const } };
		const row = numbersTable({ ...common, places: { ...places, driver } }).find(({ key }) => key === 'peakPct');
		expect(row).toMatchObject({ driver: 'no brake', difference: '' });
	});
	it('write places on the lap, also where a corner spans the line', () => {
		const view = exampleComparison({ lineAtM: 505 });
		const spanning = placedCorner(view, 1);
		if (!spanning) throw new Error('the example requires corner 1');
		const rows = numbersTable({ ...common, places: spanning });
		expect(rows.find((row) => row.key === 'onsetM')?.driver).toMatch(/^3\u00a0\d{3}\u00a0m$/);
	});
	it('read the charts every 10 m, gaps as a dash', () => {
		const gap = exampleComparison({ gaps: [[425, 450]] });
		const { columns, rows } = samplesTable(gap, { fromM: 368, toM: 615, exitGoesOnToM: null }, 379, 'kmh');
		expect(columns.map((column) => column.key)).toEqual(['brakePct', 'speedKmh', 'throttlePct', 'steeringDeg']);
		expect(rows.map((row) => row.place).slice(0, 3)).toEqual(['370', '380', '390']);
		expect(rows.find((row) => row.place === '430')?.cells[1].driver).toBe('–');
	});
});
