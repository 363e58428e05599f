/**
 * The 45° hatch of lost time as real lines that fill a box, to be clipped by whoever draws it: pattern tiles leave seams in PDF
 * and on printers. Every line is the same command but for its start, so that pages with many hatches compress.
 *
 * @param widthPx  of the box, > 0
 * @param heightPx of the box, > 0
 * @param pitchPx  distance between lines along x, > 0
 * @throws {RangeError} where one of them is not > 0
 */
export function hatchPath(widthPx: number, heightPx: number, pitchPx: number): string {
	if (!(widthPx > 0) || !(heightPx > 0) || !(pitchPx > 0)) {
		throw new RangeError(`hatchPath requires sizes > 0, got ${widthPx} × ${heightPx} at ${pitchPx}`);
	}
	const rise = Math.ceil(heightPx);
	const back = Math.round((pitchPx - rise) * 10) / 10;
	const lines = Math.ceil((widthPx + rise) / pitchPx);
	// One line runs from the foot up to the right; the next starts a pitch further on.
	const step = `m${back} ${rise}l${rise}-${rise}`;
	return `M${Math.round((pitchPx / 2 - rise) * 10) / 10} ${rise}l${rise}-${rise}${step.repeat(Math.max(0, lines - 1))}`;
}
