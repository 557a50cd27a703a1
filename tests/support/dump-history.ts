import { canonicalDump, type DumpedHistory } from '../../server/domain/movements/canonical-dump.js';
import { Network, type Configuration } from '../../server/domain/movements/configuration.js';
import type { Passage } from '../../server/domain/movements/passages.js';
import { historyOf, type History, type Ledger } from '../../server/domain/movements/history-of.js';

/** History from the whole ledger as the plain rows that a canonical dump is made of. */
export function rowsOf(history: History): DumpedHistory {
  const rows: DumpedHistory = {
    passages: [],
    passes: [],
    stays: [],
    legs: [],
    lastSeen: [],
    doubts: [],
  };
  for (const [readPointId, passes] of history.passes) {
    for (const { members, cleanStart: _, ...pass } of passes) {
      rows.passes.push({ readPointId, size: members.length, ...pass });
      for (const { passage, role, direction, basis } of members) {
        const ofPass = { passStartedAt: pass.startedAt, passOrdinal: pass.ordinal };
        const told = { role, stray: null, direction, basis };
        rows.passages.push({ readPointId, ...ofPass, ...plainRow(passage), ...told });
      }
    }
  }
  for (const [readPointId, strays] of history.strays) {
    for (const { passage, reason } of strays) {
      const ofPass = { passStartedAt: null, passOrdinal: null };
      const told = { role: 'stray', stray: reason, direction: null, basis: null };
      rows.passages.push({ readPointId, ...ofPass, ...plainRow(passage), ...told });
    }
  }
  for (const [unit, { stays, legs, lastSeen, doubts }] of history.units) {
    rows.doubts.push(...doubts.map((doubt) => ({ ...doubt, unit })));
    rows.stays.push(...stays.map((stay) => ({ ...stay, unit })));
    rows.legs.push(...legs.map((leg) => ({ ...leg, unit })));
    if (lastSeen) rows.lastSeen.push({ ...lastSeen, unit });
  }
  return rows;
}

function plainRow({ unit, first, lastAt, readCount, tagCount, own }: Passage) {
  return { unit, firstAt: first.at, lastAt, readCount, tagCount, speedKmh: own.speedKmh };
}

/** The canonical dump of what the ledger means, units named by what `historyOf` calls them. */
export function dumpOf(ledger: Ledger, configuration: Configuration): string[] {
  return canonicalDump(
    new Network(configuration),
    rowsOf(historyOf(ledger, configuration)),
    String,
  );
}
