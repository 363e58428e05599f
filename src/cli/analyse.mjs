import { bundle } from './analyse/bundle.mjs';

/** `npm run analyse`, see analyse.ts. */
await import(await bundle('src/cli/analyse.ts'));
