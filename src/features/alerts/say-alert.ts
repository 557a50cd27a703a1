import { formatDuration, minutesSince } from '../../lib/durations';
import type { AlertView } from '../../lib/wire';

/** What an alert says of its car, in one phrase. */
export function sayAlert({ kind, site }: AlertView): string {
  const place = site?.name ?? 'a place without a name';
  return kind === 'quiet' ? `Quiet since ${place}` : `Stands at ${place}`;
}

/** How long it has lasted, or lasted until it cleared; "over" where the begin was not seen. */
export function sayLength({ since, atLeast, cleared }: AlertView, now: number): string {
  const until = cleared ? Date.parse(cleared.at) : now;
  return `${atLeast ? 'over ' : ''}${formatDuration(minutesSince(since, until))}`;
}

const reasons = {
  read: 'read again',
  left: 'left the site',
  changed: 'no longer so',
  ended: 'the watch ended',
} as const;

/** Why it cleared. */
export const sayCleared = ({ cleared }: AlertView): string =>
  cleared ? reasons[cleared.because] : '';
