import type { Context } from '../lib/context.js';
import { evaluateWatches } from './evaluate-watches.js';
import { keepMonths } from './keep-months.js';
import { sendOutbox } from './send-outbox.js';

/** Work that is done again and again; each may run twice at once and does the same. */
export interface Job {
  /** Also the name of its lease. */
  name: string;
  /** Divides a minute, or is one. */
  everySeconds: 1 | 5 | 15 | 60;
  run(context: Context): Promise<unknown>;
}

/** Every timed job of the server. */
export const jobs: Job[] = [
  { name: 'evaluate-watches', everySeconds: 15, run: evaluateWatches },
  { name: 'send-outbox', everySeconds: 5, run: (context) => sendOutbox(context) },
  { name: 'keep-months', everySeconds: 60, run: keepMonths },
];
