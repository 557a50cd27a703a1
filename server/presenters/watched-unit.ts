import type { WatchedUnit } from '../contract/watches.js';

/** A car that a watch would raise an alert for, as the query finds it. */
export interface WatchedUnitRecord {
  name: { unitId: string; display: string } | null;
  kind: string;
  site: { code: string; name: string } | null;
  sinceAt: Date;
  atLeast: boolean;
}

/** `hours` since then, to one decimal. */
export function presentWatchedUnit(record: WatchedUnitRecord, now: Date): WatchedUnit {
  const hours = (now.getTime() - record.sinceAt.getTime()) / 3_600_000;
  return {
    unitId: record.name?.unitId ?? '',
    display: record.name?.display ?? '',
    kind: record.kind,
    site: record.site,
    since: record.sinceAt.toISOString(),
    atLeast: record.atLeast,
    hours: Math.floor(hours * 10) / 10,
  };
}
