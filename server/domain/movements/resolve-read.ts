import type { Identity } from '../identifiers/identity.js';
import { resolveTag } from '../identifiers/resolve-tag.js';
import type { Network, UnitRef } from './configuration.js';

/** A read as the ledger keeps it; `at` in ms, `holdCode` as judged at the door. */
export interface LedgerRead {
  siteId: number;
  antenna: number;
  tag: string;
  at: number;
  holdCode: string | null;
}

/** What a usable read names. `unit` is null for a stranger that has no row yet. */
export interface ResolvedRead {
  readPointId: number;
  unit: UnitRef | null;
  /** Null for tags that name a unit by registration alone. */
  identity: Identity | null;
}

/** Verdicts of the door that are facts of the ledger; all others follow from the configuration. */
const DOOR_FACTS = new Set(['clock-ahead', 'too-old']);

/** The unit and read point of a read, or null where it is set aside under this configuration. */
export function resolveRead(network: Network, read: LedgerRead): ResolvedRead | null {
  if (read.holdCode !== null && DOOR_FACTS.has(read.holdCode)) return null;
  const antenna = network.antenna(read.siteId, read.antenna);
  if (!antenna) return null;
  const tag = resolveTag(read.tag);
  if (tag.kind === 'hold') return null;
  const identity = tag.kind === 'epc' ? null : tag.identity;
  const unit =
    network.unitOfTag(tag.value, read.at) ??
    (identity && network.unitOfIdentity(identity.compact, read.at)) ??
    null;
  if (unit === null && !identity) return null;
  return { readPointId: antenna.readPointId, unit, identity };
}
