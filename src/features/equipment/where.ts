import type { EquipmentItem } from '../../lib/wire';
import { minutesSince } from '../../lib/durations';

/** Where a car is, in one short phrase. */
export function sayWhere({ state, quiet, lastSeen, between }: EquipmentItem): string {
  if (!lastSeen || state === 'unseen') return 'Never read';
  const site = between?.from?.name ?? lastSeen.site?.name ?? 'a place without a name';
  if (quiet) return `Quiet since ${site}`;
  if (state === 'enRoute') return `From ${site}`;
  const place = lastSeen.track ? `${site}, ${sayTrack(lastSeen.track)}` : site;
  return `${place}${saySaid(lastSeen.basis)}`;
}

/** ", as reported" for what no reader saw; nothing for what one did. */
export const saySaid = (basis: LastSeen['basis']): string =>
  basis === 'report' ? ', as reported' : basis === 'hand' ? ', seen by eye' : '';

const known: Record<LastSeen['basis'], string> = {
  read: 'read',
  riding: 'read with its car',
  report: 'reported',
  hand: 'seen by eye',
};

/** "read", "reported", "seen by eye": what stands after "last". */
export const sayLast = (basis: LastSeen['basis']): string => known[basis];

type LastSeen = NonNullable<EquipmentItem['lastSeen']>;

/** "track 7" for a bare number, else the track's own name. */
export const sayTrack = (track: string): string => (/^\d/.test(track) ? `track ${track}` : track);

/** How long that has been so, in minutes; null for a car never read. */
export function minutesThere(row: EquipmentItem, now: number): number | null {
  if (row.stay) return minutesSince(row.stay.arrivedAt ?? row.stay.firstSeenAt, now);
  return row.lastSeen ? minutesSince(row.lastSeen.at, now) : null;
}
