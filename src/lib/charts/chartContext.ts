import type { ScaleLinear } from 'd3-scale';
import { getLayerCakeContext, type LayerCakeContext } from 'layercake';

/** Scales of a ChartFrame: m and values to percent of the plot. */
interface ChartScales {
	x: ScaleLinear<number, number>;
	y: ScaleLinear<number, number>;
}

/** The frame's scales, typed; nobody else reads LayerCake's context. Read members off the result, never destructure it. */
export function chartContext(): LayerCakeContext<ChartScales, never[]> {
	return getLayerCakeContext<ChartScales, never[]>();
}
