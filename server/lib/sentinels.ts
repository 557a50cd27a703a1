/** `at` of a car that no reader has seen yet: sorts behind everything, takes no NULL. */
export const NEVER_SEEN = new Date('1970-01-01T00:00:00.000Z');

/** `quiet_at` and `limit_at` where no such limit applies. */
export const FAR = new Date('9999-12-31T00:00:00.000Z');
