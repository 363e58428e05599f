// `node src/cli/database.mjs [stop]`: starts the tests' MariaDB, leaves it running and prints its address; `stop` ends it.
import { runOnModernNode } from './setup/nodeVersion.mjs';

runOnModernNode(function () {
	return import('./setup/keepDatabase.mjs');
});
