import type { Network, UnitRef } from '../../server/domain/movements/configuration.js';
import type { UsableRead } from '../../server/domain/movements/evidence.js';
import type { Ledger } from '../../server/domain/movements/history-of.js';
import { resolveRead } from '../../server/domain/movements/resolve-read.js';

/** The reads of one read point that name a unit, by unit. */
export function usableReads(
  network: Network,
  readPointId: number,
  portion: Ledger,
): Map<UnitRef, UsableRead[]> {
  const reads = new Map<UnitRef, UsableRead[]>();
  for (const read of portion.reads) {
    const named = resolveRead(network, read);
    const unit = named?.unit ?? named?.identity?.compact;
    if (named?.readPointId !== readPointId || unit === undefined) continue;
    const own = reads.get(unit) ?? [];
    reads.set(unit, own);
    own.push({ at: read.at, antenna: read.antenna, tag: read.tag });
  }
  return reads;
}
