/** In this order, because each also names the ones after it. */
const BROWSERS: readonly [pattern: RegExp, name: string][] = [
	[/\bEdgA?\//, 'Edge'],
	[/\bOPR\//, 'Opera'],
	[/\bFirefox\/|\bFxiOS\//, 'Firefox'],
	[/Chrome\/|\bCriOS\//, 'Chrome'],
	[/\bSafari\//, 'Safari']
];
const SYSTEMS: readonly [pattern: RegExp, name: string][] = [
	[/\biPhone\b/, 'iPhone'],
	[/\biPad\b/, 'iPad'],
	[/\bAndroid\b/, 'Android'],
	[/\bWindows\b/, 'Windows'],
	[/\bMac OS X\b|\bMacintosh\b/, 'Mac'],
	[/\bLinux\b/, 'Linux']
];

/** What a person calls the browser that they signed in with: "Firefox on Windows"; its own words are too long to be read. */
export function deviceName(userAgent: string | null): string {
	const find = (list: readonly [RegExp, string][]) => list.find(([pattern]) => pattern.test(userAgent ?? ''))?.[1];
	const browser = find(BROWSERS);
	const system = find(SYSTEMS);
	if (browser === undefined) return system === undefined ? 'a program' : `a program on ${system}`;
	return system === undefined ? browser : `${browser} on ${system}`;
}
