import type { Network } from '../domain/movements/configuration.js';
import type { UsableRead } from '../domain/movements/evidence.js';
import { visitsOf, type Visit } from '../domain/movements/visits.js';
import { firstRead, lastReadAt } from '../domain/movements/evidence.js';
import type { FreshFacts } from './fold-point.js';
import type { Usable } from './fold-reads.js';
import type { Work } from './take-work.js';

/** Facts further apart are folded one after the other, so that what lies between is left alone. */
const APART_MS = 24 * 3_600_000;

/** New facts by read point, those near in time together, earliest first. */
export function factsByPoint(
  network: Network,
  wheels: Work['wheels'],
  usable: readonly Usable[],
): Map<number, FreshFacts[]> {
  const pieces = new Map<number, FreshFacts[]>();
  const add = (readPointId: number, facts: FreshFacts) => {
    if (!network.readPoints.has(readPointId)) return;
    const known = pieces.get(readPointId);
    if (known) known.push(facts);
    else pieces.set(readPointId, [facts]);
  };
  for (const { point, visit } of visitsByPoint(network, usable)) {
    const [since, until] = [firstRead(visit.evidence).at, lastReadAt(visit.evidence)];
    const unitIds = new Set([visit.unit as number]);
    add(point, { visits: [visit], unitIds, since, until, sensed: false });
  }
  for (const { readPointId, since, until } of wheels) {
    add(readPointId, { visits: [], unitIds: new Set(), since, until, sensed: true });
  }
  return new Map([...pieces].map(([readPointId, facts]) => [readPointId, together(facts)]));
}

function visitsByPoint(
  network: Network,
  usable: readonly Usable[],
): { point: number; visit: Visit }[] {
  const reads = new Map<string, { point: number; unit: number; reads: UsableRead[] }>();
  for (const { readPointId, unit, read } of usable) {
    const key = `${readPointId} ${unit}`;
    const own = reads.get(key) ?? { point: readPointId, unit, reads: [] };
    reads.set(key, own);
    own.reads.push(read);
  }
  return [...reads.values()].flatMap(({ point, unit, reads: own }) => {
    const gapMs = network.readPoint(point).visitGapSeconds * 1000;
    return visitsOf(unit, own, gapMs).map((visit) => ({ point, visit }));
  });
}

/** Facts of one read point, those near in time made one. */
export function together(pieces: readonly FreshFacts[]): FreshFacts[] {
  const joined: FreshFacts[] = [];
  for (const piece of [...pieces].sort((a, b) => a.since - b.since)) {
    const last = joined.at(-1);
    if (!last || piece.since - last.until > APART_MS) {
      joined.push({ ...piece, visits: [...piece.visits], unitIds: new Set(piece.unitIds) });
      continue;
    }
    last.visits.push(...piece.visits);
    for (const unitId of piece.unitIds) last.unitIds.add(unitId);
    last.until = Math.max(last.until, piece.until);
    last.sensed ||= piece.sensed;
  }
  return joined;
}
