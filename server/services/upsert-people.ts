import { Op, type Transaction } from 'sequelize';
import type { PersonInput } from '../contract/administration.js';
import { conflict } from '../errors.js';
import { batchPointer, faultRepeats, type Batch } from '../lib/batch.js';
import type { Context } from '../lib/context.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { inTransaction } from '../lib/in-transaction.js';
import { hashPassword } from '../lib/passwords.js';
import { modelsOf } from '../models/index.js';
import type { Person } from '../models/person.js';
import { organisationIdsByCode, siteIdsByCode } from '../queries/ids-by-code.js';

/**
 * Stores people by mail address, all or none. What is left out stays as it is; a new password
 * ends that person's sessions. There is always an administrator left.
 */
export async function upsertPeople(
  { db, clock }: Context,
  batch: Batch<PersonInput>,
): Promise<void> {
  const faults = new Faults();
  faultRepeats(batch, faults, 'email', (item) => item.email);
  faults.refuse();
  const hashes: (string | undefined)[] = [];
  for (const { password } of batch.items) {
    hashes.push(password === undefined ? undefined : await hashPassword(password));
  }
  await inTransaction(db.sequelize, async (transaction) => {
    const { Person, Session } = modelsOf(db.sequelize);
    const known = await peopleByEmail(db, batch, transaction);
    const references = await readReferences(db, batch, known, transaction);
    const rows = batch.items.map((item, index) => ({
      email: item.email,
      name: item.name,
      roles: item.roles.join(','),
      organisationId: references.organisationId(item, known.get(item.email)),
      timeZone: item.timeZone ?? known.get(item.email)?.timeZone ?? 'UTC',
      passwordHash: hashes[index] ?? known.get(item.email)?.passwordHash ?? null,
    }));
    await Person.bulkCreate(rows, {
      updateOnDuplicate: ['name', 'roles', 'organisationId', 'timeZone', 'passwordHash'],
      transaction,
    });
    const stored = await peopleByEmail(db, batch, transaction);
    await replaceSites(db, batch, stored, references.siteIds, transaction);
    const changed = batch.items.filter((_item, index) => hashes[index] !== undefined);
    await Session.update(
      { endedAt: clock.now() },
      {
        where: {
          personId: changed.map((item) => stored.get(item.email)?.id ?? 0),
          endedAt: null,
        },
        transaction,
      },
    );
    await requireAdministrator(db, transaction);
  });
}

/** Throws 409 when nobody would be left who can let people in. */
export async function requireAdministrator(db: Database, transaction: Transaction): Promise<void> {
  const { Person } = modelsOf(db.sequelize);
  const administrators = await Person.findAll({
    attributes: ['id'],
    where: { roles: { [Op.like]: '%administrator%' }, passwordHash: { [Op.not]: null } },
    limit: 1,
    lock: transaction.LOCK.UPDATE,
    transaction,
  });
  if (administrators.length === 0) {
    throw conflict('Nobody would be left who is an administrator and can sign in.');
  }
}

async function peopleByEmail(
  db: Database,
  { items }: Batch<PersonInput>,
  transaction: Transaction,
): Promise<Map<string, Person>> {
  const rows = await modelsOf(db.sequelize).Person.findAll({
    where: { email: items.map((item) => item.email) },
    // What is left out is written back as it was read: nobody may change it meanwhile.
    lock: transaction.LOCK.UPDATE,
    transaction,
  });
  return new Map(rows.map((row) => [row.email.toLowerCase(), row]));
}

async function readReferences(
  db: Database,
  batch: Batch<PersonInput>,
  known: Map<string, Person>,
  transaction: Transaction,
) {
  const codes = batch.items.flatMap(({ organisation }) => organisation ?? []);
  const organisations = await organisationIdsByCode(db, codes, transaction);
  const siteCodes = batch.items.flatMap(({ sites }) => sites ?? []);
  const siteIds = await siteIdsByCode(db, siteCodes, transaction);
  const organisationId = (item: PersonInput, person: Person | undefined): number | null => {
    if (item.organisation === undefined) return person?.organisationId ?? null;
    return item.organisation === null ? null : (organisations.get(item.organisation) ?? null);
  };
  const faults = new Faults();
  batch.items.forEach((item, index) => {
    const { organisation } = item;
    if (organisation && !organisations.has(organisation)) {
      faults.add(batchPointer(batch, index, 'organisation'), `${organisation} is not known`);
    } else if (item.roles.includes('owner') && !organisationId(item, known.get(item.email))) {
      faults.add(batchPointer(batch, index, 'organisation'), 'is missing: an owner needs one');
    }
    item.sites?.forEach((code, place) => {
      if (siteIds.has(code)) return;
      faults.add(batchPointer(batch, index, 'sites', place), `${code} is not known`);
    });
  });
  faults.refuse();
  return { organisationId, siteIds };
}

async function replaceSites(
  db: Database,
  { items }: Batch<PersonInput>,
  people: Map<string, Person>,
  siteIds: Map<string, number>,
  transaction: Transaction,
): Promise<void> {
  const { PersonSite } = modelsOf(db.sequelize);
  const changed = items.filter(({ sites }) => sites !== undefined);
  if (changed.length === 0) return;
  const personIdOf = ({ email }: PersonInput) => people.get(email)?.id ?? 0;
  await PersonSite.destroy({ where: { personId: changed.map(personIdOf) }, transaction });
  const rows = changed.flatMap((item) =>
    [...new Set(item.sites)].map((code) => ({
      personId: personIdOf(item),
      siteId: siteIds.get(code) ?? 0,
    })),
  );
  await PersonSite.bulkCreate(rows, { transaction });
}
