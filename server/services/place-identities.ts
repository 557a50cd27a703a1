import type { Transaction } from 'sequelize';
import type { Identity as IdentityForm } from '../domain/identifiers/identity.js';
import { batchPointer, type Batch } from '../lib/batch.js';
import type { Database } from '../lib/database.js';
import { end } from '../lib/validity.js';
import type { Identity } from '../models/identity.js';
import { faultOverlaps, type NamingClaim } from './fault-overlaps.js';
import { freeUnitKeys } from './free-unit-keys.js';
import { loadNamings, namingOf, type Namings } from './load-namings.js';
import { namingChanges, type NamingChange } from './naming-change.js';
import type { RegisterItem } from './read-register-items.js';
import { writeIdentities } from './write-identities.js';

/** An identity that a unit is to have, with all its forms. */
export type IdentityClaim = NamingClaim & { identity: IdentityForm };

/**
 * Gives units the identity that their items name, and exactly the former ones they list; items
 * without such a list keep theirs. A number that another car of the register carried until some
 * instant is the unit's from then on. Claims that overlap are refused with a pointer; units that
 * only reads have named make way.
 */
export async function placeIdentities(
  db: Database,
  batch: Batch<RegisterItem>,
  unitIds: Map<string, number>,
  transaction: Transaction,
): Promise<NamingChange[]> {
  const compacts = batch.items.flatMap(({ identity, formerly = [] }) => [
    identity.compact,
    ...formerly.map((former) => former.identity.compact),
  ]);
  const namings = await loadNamings(db, [...unitIds.values()], compacts, transaction);
  const claims = claimsOf(batch, unitIds, namings);
  const standing = namings.ofRegistered.map(namingOf);
  const isAsked = (claim: IdentityClaim) => claim.pointer !== null;
  faultOverlaps([
    ...standing.map((row) => ({ ...row, pointer: null })),
    ...claims.filter((claim) => !isAsked(claim)),
    ...claims.filter(isAsked),
  ]);
  const before = [...namings.own, ...namings.ofStrangers].map(namingOf);
  const after = await writeIdentities(db, namings, claims, transaction);
  await freeUnitKeys(db, compacts, transaction);
  return namingChanges('identity', [...standing, ...before], [...standing, ...after]);
}

function claimsOf(
  batch: Batch<RegisterItem>,
  unitIds: Map<string, number>,
  namings: Namings,
): IdentityClaim[] {
  const own = groupedBy(namings.own, ({ unitId }) => unitId);
  const others = groupedBy(namings.ofRegistered, ({ compact }) => compact);
  return batch.items.flatMap((item, index) => {
    const { compact } = item.identity;
    const unitId = unitIds.get(compact) ?? 0;
    const at = (...path: PropertyKey[]) => batchPointer(batch, index, ...path);
    const rows = own.get(unitId) ?? [];
    const present = rows.find((row) => row.compact === compact && row.validTo === null);
    const claim = { value: compact, unitId, identity: item.identity, pointer: at('unit') };
    const formers = item.formerly
      ? item.formerly.map(({ identity, ...validity }, place) => {
          const pointer = at('formerly', place, 'unit');
          return { ...validity, value: identity.compact, unitId, identity, pointer };
        })
      : rows.filter((row) => row !== present).map(claimOfRow);
    const ends = [
      ...(others.get(compact) ?? []).map(end).filter(Number.isFinite),
      ...(item.formerly ?? []).map(end),
      ...(item.formerly ? [] : [present?.validFrom?.getTime() ?? -Infinity]),
    ];
    const from = Math.max(-Infinity, ...ends);
    const validFrom = from === -Infinity ? null : new Date(from);
    return [...formers, { ...claim, validFrom, validTo: null }];
  });
}

function claimOfRow(row: Identity): IdentityClaim {
  const { compact, scheme, mark, number, display } = row;
  const identity = { compact, scheme: scheme as IdentityForm['scheme'], mark, number, display };
  return { ...namingOf(row), identity, pointer: null };
}

function groupedBy<Key>(rows: readonly Identity[], keyOf: (row: Identity) => Key) {
  const groups = new Map<Key, Identity[]>();
  for (const row of rows) {
    const group = groups.get(keyOf(row));
    if (group) group.push(row);
    else groups.set(keyOf(row), [row]);
  }
  return groups;
}
