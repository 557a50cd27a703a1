/** Lanes of the queue and of dirty units: no late work is begun while live work waits. */
export const LANES = { live: 0, late: 1 } as const;
export type Lane = (typeof LANES)[keyof typeof LANES];

/** A read that comes in more than this long after its time is late. */
export const LATE_AFTER_MS = 15 * 60_000;

/** A late batch holds this many reads at most, so that live work never waits long behind one. */
export const MOST_LATE_READS = 1_000;
