import { NO_BREAK_SPACE } from '../format/signs.ts';
import { formatDay, type DateFormat } from '../format/date.ts';
import type { Conditions, Intent, LayoutHead, Place, RunListItem } from '../schemas/views.ts';

/** Answers of the form about a run; "unknown" is an answer too. */
export const PLACE_TEXT: Record<Place, string> = {
	simulator: 'simulator',
	real: 'circuit',
	unknown: 'not said'
};

export const CONDITIONS_TEXT: Record<Conditions, string> = {
	dry: 'dry',
	damp: 'damp',
	wet: 'wet',
	unknown: 'not said'
};

export const INTENT_TEXT: Record<Intent, string> = {
	pace: 'pace',
	learning: 'learning',
	fuel: 'fuel',
	tyres: 'tyres',
	unknown: 'not said'
};

/**
 * How a run is called: "14 May, run 2". Without a start time in the file or from a person, the day of the upload stands,
 * because it is the only day that is known.
 */
export function runName(run: Pick<RunListItem, 'startedAt' | 'uploadedAt' | 'runOfDay'>, format: DateFormat = {}) {
	return `${formatDay(run.startedAt ?? run.uploadedAt, format)}, run${NO_BREAK_SPACE}${run.runOfDay}`;
}

/** What a circuit and a layout are called until somebody names them. */
const UNNAMED_CIRCUIT = 'unnamed circuit';
const UNNAMED_LAYOUT = 'full layout';

type Named = Pick<LayoutHead, 'name' | 'circuit'>;

/** "Vallmere Park, grand prix": the circuit, and its layout where it has a name of its own. */
export function layoutName({ name, circuit }: Named) {
	const isOwn = name !== '' && name !== circuit.name && name.toLowerCase() !== UNNAMED_LAYOUT;
	return isOwn ? `${circuit.name}, ${name}` : circuit.name;
}

/** Where, within a sentence: "at Vallmere Park, short"; what nobody has named yet is said to be that. */
export function atLayout(layout: Named) {
	const isUnnamed = layout.circuit.name.toLowerCase() === UNNAMED_CIRCUIT;
	return isUnnamed ? 'on a circuit without a name yet' : `at ${layoutName(layout)}`;
}
