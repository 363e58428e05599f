import { CHANNEL_DEFINITIONS } from './channelDefinitions.ts';
import { CORNER_DEFINITIONS } from './cornerDefinitions.ts';
import type { DefinitionGroup } from './definition.ts';
import { FINDING_DEFINITIONS } from './findingDefinitions.ts';
import { LAP_DEFINITIONS } from './lapDefinitions.ts';
import { PEDAL_DEFINITIONS } from './pedalDefinitions.ts';
import { TIME_DEFINITIONS } from './timeDefinitions.ts';

/** Every number that pages show, defined once, in the order in which it is made. */
export const DEFINITIONS: readonly DefinitionGroup[] = [
	CHANNEL_DEFINITIONS,
	LAP_DEFINITIONS,
	CORNER_DEFINITIONS,
	PEDAL_DEFINITIONS,
	TIME_DEFINITIONS,
	FINDING_DEFINITIONS
];
