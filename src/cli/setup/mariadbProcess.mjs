import { spawn } from 'node:child_process';
import { closeSync, openSync } from 'node:fs';
import { join } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { lastLines } from './debianPackages.mjs';
import { dataOf, logOf } from './mariadbFolder.mjs';

/**
 * Starts the server and does not wait for it.
 *
 * @param {import('./mariadbPrograms.mjs').MariadbPrograms} programs
 * @param {string} folder
 * @param {number} port
 * @param {string} socket
 * @param {boolean} durable
 * @returns {number} its process id
 */
export function launchMariadb(programs, folder, port, socket, durable) {
	const log = openSync(logOf(folder), 'a', 0o600);
	const args = [
		'--no-defaults', // must come first
		`--datadir=${dataOf(folder)}`,
		`--socket=${socket}`,
		`--pid-file=${join(folder, 'mariadbd.pid')}`,
		`--port=${port}`,
		`--init-file=${join(folder, 'init.sql')}`,
		'--bind-address=127.0.0.1',
		'--skip-name-resolve',
		'--character-set-server=utf8mb4',
		'--collation-server=utf8mb4_unicode_520_ci',
		'--default-time-zone=+00:00',
		'--max-allowed-packet=64M',
		'--innodb-buffer-pool-size=256M',
		...(durable ? durableSettings(folder) : relaxedSettings),
		...(programs.base ? [`--basedir=${programs.base}`, `--lc-messages-dir=${join(programs.base, 'share/mysql')}`] : []),
		...(process.getuid?.() === 0 ? ['--user=root'] : [])
	];
	try {
		// Its own process group: Ctrl-C in the terminal must reach the server first and MariaDB last.
		const child = spawn(programs.server, args, {
			cwd: folder,
			env: programs.env,
			detached: true,
			stdio: ['ignore', log, log]
		});
		if (child.pid === undefined) throw new SetupError(`MariaDB's server ${programs.server} could not be run.`);
		child.unref();
		return child.pid;
	} finally {
		closeSync(log);
	}
}

/**
 * Every commit is on the disk before it is answered, and the binary log allows restoring to a moment within two weeks.
 *
 * @param {string} folder
 */
const durableSettings = (folder) => [
	'--innodb-flush-log-at-trx-commit=1',
	'--server-id=1',
	`--log-bin=${join(dataOf(folder), 'binlog')}`,
	'--binlog-format=ROW',
	'--sync-binlog=1',
	'--binlog-expire-logs-seconds=1209600',
	'--max-binlog-size=64M'
];

const relaxedSettings = [
	'--skip-log-bin',
	'--innodb-flush-log-at-trx-commit=0',
	'--innodb-doublewrite=0',
	'--innodb-flush-method=nosync',
	'--sync-frm=0'
];

/**
 * Reads in MariaDB's log why it did not start.
 *
 * @param {string} log  what this start added
 * @param {number} port
 * @param {string} folder
 */
export function whyNotStarted(log, port, folder) {
	const details = lastLines(
		log
			.split('\n')
			.filter((line) => /\[ERROR\]/.test(line))
			.join('\n') || log
	);
	if (/Address already in use/i.test(log)) {
		return new SetupError(
			`Port ${port} is in use by another program; choose another port for MariaDB with KERBNOTE_DATABASE_PORT.`
		);
	}
	if (/No space left|Errcode: 28|OS error: 28|Disk full/i.test(log)) {
		return new SetupError(
			`MariaDB could not start because the disk is full (${folder}); free some space and start again.`,
			{ details }
		);
	}
	return new SetupError(`MariaDB did not start; its reasons stand at the end of ${logOf(folder)}.`, {
		details
	});
}
