import type { AddressInfo } from 'node:net';
import { LiveEvents } from '../../server/lib/live-events.js';
import { systemClock } from '../../server/lib/clock.js';
import { createLogger } from '../../server/lib/logger.js';
import { openDatabase } from '../../server/lib/database.js';
import { readEnv } from '../../server/config/env.js';
import { createApp } from '../../server/app.js';

// The web server alone in a process of its own, with the limits on pace lifted.
const env = readEnv();
const context = {
  env,
  db: openDatabase(env.databaseUrl),
  clock: systemClock,
  logger: createLogger('silent'),
  liveEvents: new LiveEvents(),
};
const ingest = { requestsPerSecond: 1_000_000, readsPerSecond: 1_000_000_000 };
const app = createApp(context, { limits: { ingest }, clientDirectory: null });
const server = app.listen(0, '127.0.0.1', () => {
  process.send?.({ port: (server.address() as AddressInfo).port });
});
process.once('disconnect', () => process.exit(0));
