import { readFileSync } from 'node:fs';
import { relative } from 'node:path';
import { ROOT } from './checkout.mjs';

/**
 * What a person reads when everything runs.
 *
 * @param {string} address
 * @param {string | null} accountsPath  the demo's accounts as the seed wrote them; null where there is no demo
 * @returns {string}
 */
export function welcomeText(address, accountsPath) {
	const lines = ['', `Kerbnote is ready: ${address}`];
	if (accountsPath !== null) {
		lines.push(
			'',
			`Demo accounts (kept in ${relative(ROOT, accountsPath)}):`,
			...accountLines(readFileSync(accountsPath, 'utf8'))
		);
	}
	return [...lines, '', 'Stop it with Ctrl-C.'].join('\n');
}

/**
 * @param {string} json  [{ name, email, password, role }, …]
 * @returns {string[]} one line an account, in columns
 * @example accountLines('[{"name":"Ann","email":"a@b.example","password":"pw","role":"driver"}]') // => ['  a@b.example  pw  Ann, driver']
 */
export function accountLines(json) {
	/** @type {Array<{ name: string, email: string, password: string, role: string }>} */
	const accounts = JSON.parse(json);
	const emailWidth = Math.max(0, ...accounts.map(({ email }) => email.length));
	const passwordWidth = Math.max(0, ...accounts.map(({ password }) => password.length));
	return accounts.map(
		({ name, email, password, role }) =>
			`  ${email.padEnd(emailWidth)}  ${password.padEnd(passwordWidth)}  ${name}, ${role}`
	);
}
