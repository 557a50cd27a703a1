import type { Transaction } from 'sequelize';
import type { RenumberInput } from '../contract/administration.js';
import type { Identity as IdentityForm } from '../domain/identifiers/identity.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { inTransaction } from '../lib/in-transaction.js';
import { begin } from '../lib/validity.js';
import type { Identity } from '../models/identity.js';
import { bumpConfigVersion } from './bump-config-version.js';
import { faultOverlaps } from './fault-overlaps.js';
import { freeUnitKeys } from './free-unit-keys.js';
import { loadNamings, namingOf } from './load-namings.js';
import { namingChanges, type NamingChange } from './naming-change.js';
import { planRegisterRework } from './plan-register-rework.js';
import { readIdentity } from './read-identity.js';
import { unitDisplay } from './unit-display.js';
import { requeueReports } from './requeue-reports.js';
import { writeIdentities } from './write-identities.js';

/**
 * From an instant on a unit carries another mark and number; the one before ends there. Its tags
 * stay as they are. Answers the new identity's compact form and what reads may mean otherwise.
 */
export async function renumberUnit(
  db: Database,
  unitId: number,
  input: RenumberInput,
  now: Date,
  requestedBy: number | null,
): Promise<{ compact: string; changes: NamingChange[] }> {
  const faults = new Faults();
  const identity = readIdentity(input.unit, faults, '/unit');
  if (input.from > now) faults.add('/from', 'must not lie ahead');
  faults.refuse();
  return inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    const before = await unitDisplay(db, unitId, transaction);
    const changes = await giveIdentity(db, unitId, identity, input.from, transaction);
    const words = `${before} renumbered ${identity.display}`;
    await requeueReports(transaction, changes, now);
    await planRegisterRework(transaction, { words, requestedBy, names: changes });
    return { compact: identity.compact, changes };
  });
}

async function giveIdentity(
  db: Database,
  unitId: number,
  identity: IdentityForm,
  from: Date,
  transaction: Transaction,
): Promise<NamingChange[]> {
  const namings = await loadNamings(db, [unitId], [identity.compact], transaction);
  const present = namings.own.find((row) => row.validTo === null);
  faultPresent(present, identity, from);
  const next = { unitId, value: identity.compact, validFrom: from, validTo: null };
  const standing = namings.ofRegistered.map(namingOf);
  const formers = namings.own.map((row) => ({
    ...namingOf(row),
    ...(row === present && { validTo: from }),
  }));
  faultOverlaps([
    ...[...standing, ...formers].map((row) => ({ ...row, pointer: null })),
    { ...next, pointer: '/unit' },
  ]);
  const forms = new Map(namings.own.map((row) => [row.compact, formsOf(row)]));
  const claims = [...formers, next].map((claim) => ({
    ...claim,
    identity: forms.get(claim.value) ?? identity,
  }));
  const before = [...standing, ...namings.own.map(namingOf), ...namings.ofStrangers.map(namingOf)];
  const after = await writeIdentities(db, namings, claims, transaction);
  const compacts = [identity.compact, ...namings.own.map((row) => row.compact)];
  await freeUnitKeys(db, compacts, transaction);
  return namingChanges('identity', before, [...standing, ...after]);
}

function faultPresent(present: Identity | undefined, identity: IdentityForm, from: Date): void {
  if (!present) return;
  const faults = new Faults();
  if (present.compact === identity.compact) faults.add('/unit', 'is the number it carries already');
  if (from.getTime() <= begin(present)) {
    faults.add('/from', `must be later than when it began to carry ${present.display}`);
  }
  faults.refuse();
}

function formsOf({ compact, scheme, mark, number, display }: Identity): IdentityForm {
  return { compact, scheme: scheme as IdentityForm['scheme'], mark, number, display };
}
