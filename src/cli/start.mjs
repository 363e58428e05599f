// `npm start`. Syntax that an old Node can parse: see setup/nodeVersion.mjs.
import { runOnModernNode } from './setup/nodeVersion.mjs';

runOnModernNode(function () {
	return import('./setup/startProduct.mjs');
});
