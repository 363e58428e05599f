/** The numeric core: from raw runs to an analysis and to a comparison of two laps. */

// from a file's runs to everything that is known of them
export { analyseRun } from './analyseRun.ts';
export type { AnalyseOptions, KnownLayout, RunAnalysis } from './analyseRun.ts';

// two laps from stored data
export { compareLaps } from './compare/compareLaps.ts';
export type { CompareInput, CompareSide } from './compare/compareLaps.ts';
export { shortList } from './compare/shortList.ts';

// what findings say
export { countsOnce } from './findings/countsOnce.ts';
export { findingParts, findingText } from './findings/findingText.ts';
export type { TextPart } from './findings/findingText.ts';
