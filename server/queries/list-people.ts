import { Op, type Includeable } from 'sequelize';
import { z } from 'zod';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { Person } from '../models/person.js';

interface Page {
  limit: number;
  cursor?: string | undefined;
}

function withPlaces(db: Database): Includeable[] {
  const { Organisation, Site } = modelsOf(db.sequelize);
  return [
    { model: Organisation, as: 'organisation', attributes: ['code'] },
    { model: Site, as: 'sites', attributes: ['code'], through: { attributes: [] } },
  ];
}

/** People by id, with organisation and sites. */
export async function listPeople(db: Database, { limit, cursor }: Page) {
  const after = readCursor(cursor, z.int().min(0));
  const rows = await modelsOf(db.sequelize).Person.findAll({
    where: { id: { [Op.gt]: after ?? 0 } },
    include: withPlaces(db),
    order: [['id', 'ASC']],
    limit: limit + 1,
  });
  return pageFrom(rows, limit, (last) => last.id);
}

/** The person with this id, or null, with organisation and sites. */
export function findPerson(db: Database, id: number): Promise<Person | null> {
  return modelsOf(db.sequelize).Person.findByPk(id, { include: withPlaces(db) });
}

/** The people with these lower-case addresses, in that order; unknown ones are left out. */
export async function findPeople(db: Database, emails: string[]): Promise<Person[]> {
  const rows = await modelsOf(db.sequelize).Person.findAll({
    where: { email: emails },
    include: withPlaces(db),
  });
  const byEmail = new Map(rows.map((row) => [row.email.toLowerCase(), row]));
  return emails.flatMap((email) => byEmail.get(email) ?? []);
}
