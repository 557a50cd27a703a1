import { readEnv, type Env } from '../../server/config/env.js';
import type { Clock } from '../../server/lib/clock.js';
import type { Context } from '../../server/lib/context.js';
import type { Database } from '../../server/lib/database.js';
import { LiveEvents } from '../../server/lib/live-events.js';
import { createLogger } from '../../server/lib/logger.js';
import { testDatabaseUrl } from './database.js';

/** A clock that stands until a test moves it. */
export interface TestClock extends Clock {
  set(instant: string | Date): void;
  advance(milliseconds: number): void;
}

/** Starts at `instant`; without one at the present, rounded to the second. */
export function buildClock(instant?: string): TestClock {
  let now = instant ? new Date(instant) : new Date(Math.floor(Date.now() / 1000) * 1000);
  return {
    now: () => new Date(now),
    set: (next) => {
      now = new Date(next);
    },
    advance: (milliseconds) => {
      now = new Date(now.getTime() + milliseconds);
    },
  };
}

/** The settings of a server on the worker's own database. */
export function buildEnv(changes: Partial<Env> = {}): Env {
  const env = readEnv({
    DATABASE_URL: testDatabaseUrl(),
    SESSION_SECRET: 'a secret that only tests know, 0123456789',
  });
  return { ...env, ...changes };
}

/** What the server hands to its parts, on the given database, with a clock that stands. */
export function buildContext(
  db: Database,
  changes: { env?: Partial<Env>; clock?: Clock } = {},
): Context & { clock: TestClock } {
  return {
    env: buildEnv(changes.env),
    db,
    clock: (changes.clock ?? buildClock()) as TestClock,
    logger: createLogger('silent'),
    liveEvents: new LiveEvents(),
  };
}
