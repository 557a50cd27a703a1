import { Op } from 'sequelize';
import { z } from 'zod';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';

interface Page {
  limit: number;
  cursor?: string | undefined;
}

/** Organisations by code. */
export async function listOrganisations(db: Database, { limit, cursor }: Page) {
  const after = readCursor(cursor, z.string().max(16));
  const rows = await modelsOf(db.sequelize).Organisation.findAll({
    where: after === null ? {} : { code: { [Op.gt]: after } },
    order: [['code', 'ASC']],
    limit: limit + 1,
  });
  return pageFrom(rows, limit, (last) => last.code);
}

/** The organisations with these codes, in that order; unknown ones are left out. */
export async function findOrganisations(db: Database, codes: string[]) {
  const rows = await modelsOf(db.sequelize).Organisation.findAll({ where: { code: codes } });
  const byCode = new Map(rows.map((row) => [row.code, row]));
  return codes.flatMap((code) => byCode.get(code) ?? []);
}
