import { Op } from 'sequelize';
import { z } from 'zod';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { Site } from '../models/site.js';

interface Page {
  limit: number;
  cursor?: string | undefined;
}

/** Sites by code. */
export async function listSites(db: Database, { limit, cursor }: Page) {
  const after = readCursor(cursor, z.string().max(16));
  const rows = await modelsOf(db.sequelize).Site.findAll({
    where: after === null ? {} : { code: { [Op.gt]: after } },
    order: [['code', 'ASC']],
    limit: limit + 1,
  });
  return pageFrom(rows, limit, (last) => last.code);
}

/** The site with this code, or null. */
export function findSite(db: Database, code: string): Promise<Site | null> {
  return modelsOf(db.sequelize).Site.findOne({ where: { code } });
}

/** The sites with these codes, in that order; unknown ones are left out. */
export async function findSites(db: Database, codes: string[]): Promise<Site[]> {
  const rows = await modelsOf(db.sequelize).Site.findAll({ where: { code: codes } });
  const byCode = new Map(rows.map((row) => [row.code, row]));
  return codes.flatMap((code) => byCode.get(code) ?? []);
}

/** Codes of the sites with these ids; nulls may be among them. */
export async function siteCodesById(
  db: Database,
  ids: Iterable<number | null>,
): Promise<Map<number, string>> {
  const id = [...new Set(ids)].filter((one) => one !== null);
  if (id.length === 0) return new Map();
  const rows = await modelsOf(db.sequelize).Site.findAll({
    attributes: ['id', 'code'],
    where: { id },
  });
  return new Map(rows.map((row) => [row.id, row.code]));
}

/** Sites by name, at most `limit`; `siteIds` null: of all, else of these. */
export async function listSiteNames(db: Database, siteIds: number[] | null, limit: number) {
  return modelsOf(db.sequelize).Site.findAll({
    attributes: ['code', 'name'],
    where: siteIds === null ? {} : { id: siteIds },
    order: [
      ['name', 'ASC'],
      ['code', 'ASC'],
    ],
    limit,
  });
}
