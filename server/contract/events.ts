import { z } from 'zod';

/** Names of the server-sent events. `ready` opens every stream, `reset` means: ask for all anew. */
export const eventNames = ['ready', 'changed', 'alerts', 'reset'] as const;
export type EventName = (typeof eventNames)[number];

/** Data of `changed`: units (compact identities) whose picture changed, of those one may see. */
export const changedEvent = z.object({ unitIds: z.array(z.string()) });
export type ChangedEvent = z.infer<typeof changedEvent>;

/** A comment goes out this often, so that a dead line is noticed. */
export const HEARTBEAT_MS = 15_000;
