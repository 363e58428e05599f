import { formatUnit } from './unit.ts';

/** A file's size in decimal units: "18.4 MB", "912 kB". */
export function formatSize(bytes: number) {
	if (bytes < 1000) return formatUnit(bytes, bytes === 1 ? 'byte' : 'bytes');
	if (bytes < 999_500) return formatUnit(bytes / 1000, 'kB');
	if (bytes < 999_950_000) return formatUnit(bytes / 1e6, 'MB', { decimals: 1 });
	return formatUnit(bytes / 1e9, 'GB', { decimals: 1 });
}
