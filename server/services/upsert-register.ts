import type { Transaction } from 'sequelize';
import type { RegisterInput } from '../contract/administration.js';
import { batchPointer, faultRepeats, type Batch } from '../lib/batch.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';
import type { Unit } from '../models/unit.js';
import { organisationIdsByCode } from '../queries/ids-by-code.js';
import { unitIdsNamedNow } from '../queries/unit-ids-named-now.js';
import { bumpConfigVersion } from './bump-config-version.js';
import { freeUnitKeys } from './free-unit-keys.js';
import { placeIdentities } from './place-identities.js';
import { namesOf, planRegisterRework, type RegisteredKind } from './plan-register-rework.js';
import { readRegisterItems, type RegisterItem } from './read-register-items.js';
import { replaceTags } from './replace-tags.js';
import { requeueReports } from './requeue-reports.js';

/** Compact identities in the order of the batch, and the ids of the units they now name. */
export interface Registered {
  compacts: string[];
  unitIds: number[];
}

/**
 * Puts units on the register, by the identity that they carry now, all or none, in a fixed number
 * of statements. One that only reads have named so far becomes registered; a number that nobody
 * carries any more makes another unit than the one that carried it. What is left out stays as it
 * is; tags and former identities that are given are all it has from now on.
 */
export async function upsertRegister(
  db: Database,
  batch: Batch<RegisterInput>,
  now: Date,
  requestedBy: number | null,
): Promise<Registered> {
  const faults = new Faults();
  const items = readRegisterItems(batch, faults, now);
  const parsed = { ...batch, items };
  faultRepeats(parsed, faults, 'unit', ({ identity }) => identity.compact);
  return inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    const owners = await readOwners(db, batch, faults, transaction);
    faults.refuse();
    const compacts = items.map(({ identity }) => identity.compact);
    const known = await unitIdsNamedNow(db, compacts, now, transaction);
    await freeUnitKeys(db, compacts, transaction);
    const units = await upsertUnits(db, items, known, owners, transaction);
    const unitIds = await withNewUnits(db, compacts, known, transaction);
    const numbers = await placeIdentities(db, parsed, unitIds, transaction);
    const tags = await replaceTags(db, parsed, unitIds, transaction);
    await requeueReports(transaction, numbers, now);
    await planRegisterRework(transaction, {
      words: `Register: ${namesOf(items.map(({ identity }) => identity.display))}`,
      requestedBy,
      names: [...numbers, ...tags],
      units,
    });
    return { compacts, unitIds: compacts.flatMap((compact) => unitIds.get(compact) ?? []) };
  });
}

async function readOwners(
  db: Database,
  batch: Batch<RegisterInput>,
  faults: Faults,
  transaction: Transaction,
): Promise<Map<string, number>> {
  const codes = batch.items.flatMap(({ owner }) => owner ?? []);
  const owners = await organisationIdsByCode(db, codes, transaction);
  batch.items.forEach(({ owner }, index) => {
    if (!owner || owners.has(owner)) return;
    faults.add(batchPointer(batch, index, 'owner'), `${owner} is not known`);
  });
  return owners;
}

async function upsertUnits(
  db: Database,
  items: RegisterItem[],
  known: Map<string, number>,
  owners: Map<string, number>,
  transaction: Transaction,
): Promise<{ before: RegisteredKind[]; after: RegisteredKind[] }> {
  const { Unit } = modelsOf(db.sequelize);
  const present = await Unit.findAll({ where: { id: [...known.values()] }, transaction });
  const byId = new Map<number | undefined, Unit>(present.map((unit) => [unit.id, unit]));
  const rows = items.map((item) => {
    const unit = byId.get(known.get(item.identity.compact));
    return rowOf(item, unit, owners);
  });
  await Unit.bulkCreate(rows, {
    updateOnDuplicate: [
      'kind',
      'groupCode',
      'carType',
      'registered',
      'ownerId',
      'lengthDm',
      'axles',
    ],
    transaction,
  });
  return {
    before: present.map(({ id, kind, registered }) => ({ unitId: id, kind, registered })),
    after: items.flatMap(({ identity, input: { kind } }) => {
      const unitId = known.get(identity.compact);
      return unitId === undefined ? [] : [{ unitId, kind, registered: true }];
    }),
  };
}

/** What is to be stored; of what the item leaves out, what stands there. */
function rowOf(item: RegisterItem, unit: Unit | undefined, owners: Map<string, number>) {
  const { input, identity } = item;
  const kept = <Value>(value: Value | undefined, present: Value | undefined) =>
    value === undefined ? (present ?? null) : value;
  const ownerId = input.owner && owners.get(input.owner);
  return {
    unitKey: unit?.unitKey ?? identity.compact,
    kind: input.kind,
    groupCode: item.groupCode ?? unit?.groupCode ?? null,
    carType: kept(input.carType, unit?.carType),
    registered: true,
    ownerId: kept(input.owner === null ? null : ownerId || undefined, unit?.ownerId),
    lengthDm: kept(input.lengthDm, unit?.lengthDm),
    axles: kept(input.axles, unit?.axles),
  };
}

/** The units of the batch: those that were known, and those that stand under their keys now. */
async function withNewUnits(
  db: Database,
  compacts: readonly string[],
  known: Map<string, number>,
  transaction: Transaction,
): Promise<Map<string, number>> {
  const made = await modelsOf(db.sequelize).Unit.findAll({
    attributes: ['id', 'unitKey'],
    where: { unitKey: compacts.filter((compact) => !known.has(compact)) },
    transaction,
  });
  return new Map([...known, ...made.map((unit) => [unit.unitKey, unit.id] as const)]);
}
