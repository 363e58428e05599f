import { createContext } from 'svelte';
import type { DateFormat } from '../format/date.ts';
import type { SpeedUnit } from '../format/speed.ts';

/** How the person who reads wants figures set. Getters, so that a change in the settings shows at once. */
export interface Reader {
	readonly speedUnit: SpeedUnit;
	/** the same moment and zone on the server and in the browser, so that both write the same day */
	readonly dates: DateFormat;
}

/** Set once in the root layout; read by every component that writes a speed or a day. */
export const [getReader, setReader] = createContext<Reader>();
