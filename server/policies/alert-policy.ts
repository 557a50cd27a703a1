import type { AlertState } from '../contract/alerts.js';
import type { Policy } from './policy.js';
import { watchPolicy, type WatchSubject } from './watch-policy.js';

export interface AlertSubject {
  state: AlertState;
  watch: WatchSubject;
}

/**
 * Whoever a watch tells may take its alerts. Whether the car itself may be seen is decided by
 * the query that found the alert.
 */
export const alertPolicy: Policy<AlertSubject, 'acknowledge'> = {
  see: (actor, alert) => watchPolicy.see(actor, alert.watch),
  acknowledge: (actor, alert) => watchPolicy.see(actor, alert.watch),
};
