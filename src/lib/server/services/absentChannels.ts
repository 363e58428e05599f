import type { SourceSummary } from '../../schemas/analysisDocument.ts';
import type { Channel } from '../../schemas/channels.ts';
import type { WarningCode } from '../../schemas/codes.ts';
import type { UploadView } from '../../schemas/views.ts';

/** What a run is better with: any of the channels will do. `instead` says what is used, where a warning says that it was. */
const WISHES: readonly { name: string; anyOf: readonly Channel[]; instead: (has: Has) => string | null }[] = [
	{
		name: 'distance',
		anyOf: ['distance', 'lapDistance'],
		instead: () => 'from speed'
	},
	{
		name: 'speed',
		anyOf: ['speed'],
		instead: ({ warning }) =>
			warning('speed_from_wheel')
				? 'from the wheel speeds'
				: warning('speed_from_distance')
					? 'from distance'
					: 'from positions'
	},
	{
		name: 'brake',
		anyOf: ['brake'],
		instead: ({ warning }) => (warning('brake_from_deceleration') ? 'braking is read from the deceleration' : null)
	},
	{ name: 'throttle', anyOf: ['throttle'], instead: () => null },
	{ name: 'steering', anyOf: ['steering'], instead: () => null },
	{
		name: 'position',
		anyOf: ['latitude', 'positionX'],
		instead: ({ any }) =>
			any('accLat')
				? 'the path comes from the lateral acceleration'
				: any('yawRate')
					? 'the path comes from the yaw rate'
					: any('steering')
						? 'the path comes from the steering'
						: 'corners are found from speed alone'
	},
	{ name: 'wheel speeds', anyOf: ['wheelSpeedFl', 'wheelSpeedFr', 'wheelSpeedRl', 'wheelSpeedRr'], instead: () => null }
];

interface Has {
	any(...channels: Channel[]): boolean;
	warning(code: WarningCode): boolean;
}

/** Channels that the file has no column for, and what is used in their place, if anything. */
export function absentChannels(source: SourceSummary): UploadView['absent'] {
	const channels = new Set(source.columns.flatMap(({ channel }) => channel ?? []));
	const codes = new Set(source.warnings.map(({ code }) => code));
	const has: Has = {
		any: (...wanted) => wanted.some((channel) => channels.has(channel)),
		warning: (code) => codes.has(code)
	};
	return WISHES.filter(({ anyOf }) => !has.any(...anyOf)).map(({ name, instead }) => ({
		channel: name,
		instead: instead(has)
	}));
}
