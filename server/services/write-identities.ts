import type { Transaction } from 'sequelize';
import type { Identity as IdentityForm } from '../domain/identifiers/identity.js';
import type { Database } from '../lib/database.js';
import { begin, end, overlaps } from '../lib/validity.js';
import type { Identity } from '../models/identity.js';
import { modelsOf } from '../models/index.js';
import { namingOf, type Namings } from './load-namings.js';
import type { NamingRow } from './naming-change.js';

type Claim = NamingRow & { identity: IdentityForm };

/**
 * Makes `claims` the identities of the units they are of, and lets strangers make way. Answers
 * what the numbers name from now on, those of the register's other units left out.
 */
export async function writeIdentities(
  db: Database,
  { own, ofStrangers }: Namings,
  claims: readonly Claim[],
  transaction: Transaction,
): Promise<NamingRow[]> {
  const { Identity } = modelsOf(db.sequelize);
  const wanted = new Set(claims.map(keyOf));
  const kept = new Set(own.map((row) => keyOf(namingOf(row))));
  const strangers = makeWay(ofStrangers, claims);
  const gone = [...own.filter((row) => !wanted.has(keyOf(namingOf(row)))), ...strangers.gone];
  if (gone.length > 0) {
    await Identity.destroy({ where: { id: gone.map(({ id }) => id) }, transaction });
  }
  await Identity.bulkCreate(
    strangers.cut.map((row) => row.get({ plain: true })),
    { updateOnDuplicate: ['validFrom'], transaction },
  );
  await Identity.bulkCreate(
    claims
      .filter((claim) => !kept.has(keyOf(claim)))
      .map(({ unitId, identity, validFrom, validTo }) => ({
        ...identity,
        unitId,
        validFrom,
        validTo,
      })),
    { transaction },
  );
  return [...claims, ...strangers.untouched.map(namingOf), ...strangers.cut.map(namingOf)];
}

/**
 * Of two that hold at once the one that began later is the one that reads name, so a stranger is
 * in the way only where it begins with the claim or after it: there it begins as the claim ends.
 * For the time before and after the claim it stays what it is.
 */
function makeWay(strangers: readonly Identity[], claims: readonly Claim[]) {
  const byValue = new Map<string, Claim[]>();
  for (const claim of claims) {
    byValue.set(claim.value, [...(byValue.get(claim.value) ?? []), claim]);
  }
  const result = { untouched: [] as Identity[], cut: [] as Identity[], gone: [] as Identity[] };
  for (const row of strangers) {
    const { begins, ends } = remainder(row, byValue.get(row.compact) ?? []);
    if (begins === begin(row)) result.untouched.push(row);
    else if (begins >= ends) result.gone.push(row);
    else {
      row.validFrom = new Date(begins);
      result.cut.push(row);
    }
  }
  return result;
}

function remainder(row: Identity, claims: readonly Claim[]) {
  const ends = end(row);
  let begins = begin(row);
  const inOrder = [...claims].sort((a, b) => begin(a) - begin(b));
  for (const claim of inOrder) {
    const rest = {
      validFrom: begins === -Infinity ? null : new Date(begins),
      validTo: row.validTo,
    };
    if (begins < ends && overlaps(claim, rest) && begin(claim) <= begins) begins = end(claim);
  }
  return { begins, ends };
}

function keyOf({ unitId, value, validFrom, validTo }: NamingRow): string {
  return [unitId, value, validFrom?.getTime(), validTo?.getTime()].join(' ');
}
