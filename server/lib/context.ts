import type { Logger } from 'pino';
import type { Env } from '../config/env.js';
import type { Clock } from './clock.js';
import type { Database } from './database.js';
import type { LiveEvents } from './live-events.js';

/** What every route, job and projection is handed; built once in index.ts and by the tests. */
export interface Context {
  env: Env;
  db: Database;
  clock: Clock;
  logger: Logger;
  liveEvents: LiveEvents;
}
