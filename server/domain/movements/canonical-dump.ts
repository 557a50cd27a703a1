import type { Network, UnitRef } from './configuration.js';
import type { Doubt } from './doubt.js';
import type { Leg, Stay } from './fold-state.js';
import type { LastSeen } from './last-seen.js';

/** One passage as history shows it. */
export interface DumpedPassage {
  readPointId: number;
  /** Null for a stray, which is in no pass. */
  passStartedAt: number | null;
  passOrdinal: number | null;
  unit: UnitRef;
  firstAt: number;
  lastAt: number;
  readCount: number;
  tagCount: number;
  role: string;
  stray: string | null;
  direction: string | null;
  basis: string | null;
  speedKmh: number | null;
}

export interface DumpedPass {
  readPointId: number;
  startedAt: number;
  ordinal: number;
  endedAt: number;
  direction: string | null;
  basis: string | null;
  speedKmh: number | null;
  reversal: boolean;
  size: number;
}

/** History as plain rows, wherever it was computed. */
export interface DumpedHistory {
  passages: DumpedPassage[];
  passes: DumpedPass[];
  stays: (Stay & { unit: UnitRef })[];
  legs: (Leg & { unit: UnitRef })[];
  lastSeen: (LastSeen & { unit: UnitRef })[];
  doubts: (Doubt & { unit: UnitRef })[];
}

/**
 * History as sorted lines by natural keys and values, without row ids: two histories are the same
 * when these are. `nameOf` gives a unit's key.
 */
export function canonicalDump(
  network: Network,
  history: DumpedHistory,
  nameOf: (unit: UnitRef) => string,
): string[] {
  const site = (id: number | null) => (id === null ? '-' : network.site(id).code);
  const point = (id: number | null) => {
    if (id === null) return '-';
    const { siteId, code } = network.readPoint(id);
    return `${site(siteId)}/${code}`;
  };
  const line = (...parts: unknown[]) => parts.map((part) => JSON.stringify(part)).join(' ');
  return [
    ...history.passages.map((row) => {
      const { readPointId, unit, ...rest } = row;
      return line('passage', point(readPointId), nameOf(unit), Object.values(sorted(rest)));
    }),
    ...history.passes.map(({ readPointId, ...rest }) =>
      line('pass', point(readPointId), Object.values(sorted(rest))),
    ),
    ...history.stays.map(({ unit, siteId, openedByPresence: _, ...rest }) =>
      line('stay', nameOf(unit), site(siteId), sorted(rest)),
    ),
    ...history.legs.map(({ unit, fromSiteId, toSiteId, ...rest }) =>
      line('leg', nameOf(unit), site(fromSiteId), site(toSiteId), sorted(rest)),
    ),
    ...history.lastSeen.map(({ unit, siteId, staySiteId, readPointId, pass, ...rest }) => {
      const where = [site(siteId), site(staySiteId), point(readPointId)];
      const inPass = pass && [point(pass.readPointId), pass.startedAt, pass.ordinal];
      return line('last', nameOf(unit), ...where, inPass, sorted(rest));
    }),
    ...history.doubts.map(({ unit, readPointId, previousReadPointId, ...rest }) => {
      const where = [point(previousReadPointId), point(readPointId)];
      return line('doubt', nameOf(unit), ...where, sorted(rest));
    }),
  ].sort();
}

function sorted(row: object): Record<string, unknown> {
  return Object.fromEntries(Object.entries(row).sort(([a], [b]) => (a < b ? -1 : 1)));
}
