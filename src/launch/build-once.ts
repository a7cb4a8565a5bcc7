import { buildWhenStale } from './build';

/** Makes the build when it is stale, for `npm test`. */
await buildWhenStale(() => undefined);
