/** The present instant, handed to whoever needs it, so that tests and backfill can set it. */
export interface Clock {
  now(): Date;
}

export const systemClock: Clock = { now: () => new Date() };
