import type { Identity } from '../identifiers/identity.js';
import { resolveTag, type TagHold } from '../identifiers/resolve-tag.js';
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

/** True for what the door alone could judge. */
export function isDoorFact(holdCode: string | null): boolean {
  return holdCode !== null && DOOR_FACTS.has(holdCode);
}

/** Why a read is set aside under this configuration, whatever the door thought; null: it is used. */
export type Verdict = 'unknown-antenna' | 'unmapped-epc' | TagHold;

/** The verdict on a read that is no fact of the door. */
export function verdictOf(network: Network, read: LedgerRead): Verdict | null {
  const judged = judge(network, read);
  return typeof judged === 'string' ? judged : null;
}

/** The unit and read point of a read, or null where it is set aside under this configuration. */
export function resolveRead(network: Network, read: LedgerRead): ResolvedRead | null {
  if (isDoorFact(read.holdCode)) return null;
  const judged = judge(network, read);
  return typeof judged === 'string' ? null : judged;
}

function judge(network: Network, read: LedgerRead): ResolvedRead | Verdict {
  const antenna = network.antenna(read.siteId, read.antenna);
  if (!antenna) return 'unknown-antenna';
  const tag = resolveTag(read.tag);
  if (tag.kind === 'hold') return tag.hold;
  const identity = tag.kind === 'epc' ? null : tag.identity;
  const unit =
    network.unitOfTag(tag.value, read.at) ??
    (identity && network.unitOfIdentity(identity.compact, read.at)) ??
    null;
  if (unit === null && !identity) return 'unmapped-epc';
  return { readPointId: antenna.readPointId, unit, identity };
}
