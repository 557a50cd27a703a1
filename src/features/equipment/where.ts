import type { EquipmentItem } from '../../lib/wire';
import { minutesSince } from '../../lib/durations';

/** Where a car is, in one short phrase. */
export function sayWhere({ state, quiet, lastSeen, between }: EquipmentItem): string {
  if (!lastSeen || state === 'unseen') return 'Never read';
  const site = between?.from?.name ?? lastSeen.site?.name ?? 'a place without a name';
  if (quiet) return `Quiet since ${site}`;
  if (state === 'enRoute') return `From ${site}`;
  return lastSeen.track ? `${site}, ${sayTrack(lastSeen.track)}` : site;
}

/** "track 7" for a bare number, else the track's own name. */
export const sayTrack = (track: string): string => (/^\d/.test(track) ? `track ${track}` : track);

/** How long that has been so, in minutes; null for a car never read. */
export function minutesThere(row: EquipmentItem, now: number): number | null {
  if (row.stay) return minutesSince(row.stay.arrivedAt ?? row.stay.firstSeenAt, now);
  return row.lastSeen ? minutesSince(row.lastSeen.at, now) : null;
}
