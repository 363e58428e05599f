import {
	TIME,
	ALL,
	column,
	round,
	without,
	swap,
	file,
	lines,
	fromLines,
	accepted,
	samples
} from './writtenColumns.ts';
import type { AcceptedCase } from './writtenColumns.ts';

const two = (value: number) => String(value).padStart(2, '0');
function clockText(seconds: number, sign = '.', hours = true): string {
	const ms = Math.round(seconds * 1000);
	const [h, m, s, rest] = [
		Math.floor(ms / 3_600_000) % 24,
		Math.floor(ms / 60_000) % 60,
		Math.floor(ms / 1000) % 60,
		ms % 1000
	];
	return `${hours ? `${two(h)}:` : ''}${two(m)}:${two(s)}${sign}${String(rest).padStart(3, '0')}`;
}
const EPOCH_S = 1_779_033_851;
const iso = (seconds: number, zone: string) =>
	`${new Date((EPOCH_S + seconds) * 1000).toISOString().slice(0, 23)}${zone}`;
/** 17 May 2026, 10:00, as a spreadsheet counts days. */
const SERIAL = 46_159 + 10 / 24;

export const times: AcceptedCase[] = [
	...(
		[
			['epoch s', 1],
			['epoch ms', 1e3],
			['epoch us', 1e6]
		] as const
	).map(([name, perSecond]) =>
		accepted(
			`time as ${name}`,
			file(
				swap(
					TIME,
					column('time', ({ timeS }) =>
						perSecond === 1
							? (EPOCH_S + timeS).toFixed(3)
							: String(Math.round((EPOCH_S + timeS) * 1000) * (perSecond / 1e3))
					)
				)
			)
		)
	),
	accepted(
		'time as epoch ns',
		file(
			swap(
				TIME,
				column('timestamp', ({ timeS }) => `${Math.round((EPOCH_S + timeS) * 1000)}000000`)
			)
		)
	),
	...(
		[
			['time (ms)', 1e3],
			['time [us]', 1e6],
			['time_ns', 1e9],
			['time (min)', 1 / 60]
		] as const
	).map(([header, perSecond]) =>
		accepted(
			`time as ${header}`,
			file(
				swap(
					TIME,
					column(header, ({ timeS }) => round(timeS * perSecond, 7))
				)
			)
		)
	),
	accepted(
		'time in ms without a unit',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => Math.round(timeS * 1000))
			)
		)
	),
	...['Z', '+02:00', '-0500', ''].map((zone) =>
		accepted(
			`time ISO 8601 with zone "${zone}"`,
			file(
				swap(
					TIME,
					column('timestamp', ({ timeS }) => iso(timeS, zone))
				)
			)
		)
	),
	accepted(
		'time with a space after the date',
		file(
			swap(
				TIME,
				column('date time', ({ timeS }) => iso(timeS, '').replace('T', ' '))
			)
		)
	),
	accepted(
		'time of day',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => clockText(36_000 + timeS))
			)
		)
	),
	accepted(
		'time of day with a comma',
		file(
			swap(
				TIME,
				column('Zeit', ({ timeS }) => clockText(36_000 + timeS, ','))
			),
			{ delimiter: ';', decimal: ',' }
		)
	),
	accepted(
		'time of day that passes midnight',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => clockText(86_390 + timeS))
			)
		)
	),
	accepted(
		'stop-watch time',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => clockText(timeS, '.', false))
			)
		)
	),
	accepted(
		'date and time of day in two columns',
		file([
			column('date', () => '17.05.2026'),
			column('time', ({ timeS }) => clockText(36_000 + timeS)),
			...without(TIME)
		])
	),
	accepted(
		'days as a spreadsheet counts them',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => (SERIAL + timeS / 86_400).toFixed(9))
			)
		),
		{}
	),
	accepted(
		'more than one time column',
		file([column('lap time (s)', ({ lapDistanceM }) => round(lapDistanceM / 16, 3)), ...ALL])
	),
	accepted(
		'time with jitter',
		file(
			swap(
				TIME,
				column('time (s)', ({ timeS }, i) => round(timeS + (i % 3) * 0.004, 3))
			)
		),
		{ sameTime: false }
	),
	accepted('repeated rows', fromLines(lines().flatMap((line, i) => (i > 0 && i % 80 === 5 ? [line, line] : [line]))), {
		warnings: ['duplicate_rows']
	}),
	accepted('rows written twice', fromLines([...lines().slice(0, 300), ...lines().slice(280)]), {
		warnings: ['overlap_removed']
	}),
	accepted('drop-out of two seconds', fromLines(lines().filter((_, i) => i < 500 || i >= 520)), { sameTime: false }),
	accepted(
		'a second run after a pause',
		file(ALL, {}, [...samples, ...samples.map((s) => ({ ...s, timeS: s.timeS + 2000 }))]),
		{ sameTime: false, runs: 2, warnings: ['more_runs'] }
	),
	accepted(
		'a second run whose time starts anew',
		file(ALL, {}, [...samples, ...samples.map((s) => ({ ...s, throttlePct: round(s.throttlePct / 2, 1) }))]),
		{
			sameTime: false,
			runs: 2,
			warnings: ['more_runs']
		}
	)
];
