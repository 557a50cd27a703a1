import type { FleetSummary } from '../contract/fleet.js';

const HOUR_MS = 3_600_000;

/** What the opening sentence says, as of `now`. Hours are whole, rounded down. */
export function presentFleetSummary(
  counts: Omit<FleetSummary, 'oldestPastLimit' | 'asOf' | 'projectorLagMs'>,
  oldest: {
    identity: { compact: string; display: string };
    since: Date;
    site_code: string;
    site_name: string;
  } | null,
  { now, projectorLagMs }: { now: Date; projectorLagMs: number },
): FleetSummary {
  return {
    total: counts.total,
    onHand: counts.onHand,
    enRoute: counts.enRoute,
    unseen: counts.unseen,
    quiet: counts.quiet,
    pastLimit: counts.pastLimit,
    readLast24h: counts.readLast24h,
    holds: counts.holds,
    oldestPastLimit: oldest && {
      unitId: oldest.identity.compact,
      display: oldest.identity.display,
      hours: Math.floor((now.getTime() - oldest.since.getTime()) / HOUR_MS),
      site: { code: oldest.site_code, name: oldest.site_name },
    },
    asOf: now.toISOString(),
    projectorLagMs: Math.round(projectorLagMs),
  };
}
