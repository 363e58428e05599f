/** From the bytes of a file to runs. */
export { readRun } from './readRun.ts';
export { RunReader } from './runReader.ts';
export type { ReadOptions } from './runReader.ts';
export type { RawRun } from './rawRun.ts';
