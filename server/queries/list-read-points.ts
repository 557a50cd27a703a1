import { Op, type Order, type WhereOptions } from 'sequelize';
import { z } from 'zod';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { ReadPoint } from '../models/read-point.js';
import { isAdministrator, worksAtSites, type Actor } from '../policies/actor.js';
import { siteCodesById } from './list-sites.js';

/** Read points with the codes of every site they name, by site id. */
export interface ReadPointsWithCodes {
  rows: ReadPoint[];
  codes: Map<number, string>;
}

const order: Order = [
  ['siteId', 'ASC'],
  ['code', 'ASC'],
];

/** Read points of the sites the actor works at (all for administrators), site by site. */
export async function listReadPoints(
  db: Database,
  actor: Actor,
  query: { limit: number; cursor?: string | undefined; site?: string | undefined },
): Promise<ReadPointsWithCodes & { next: string | null }> {
  const { ReadPoint, Site } = modelsOf(db.sequelize);
  const after = readCursor(query.cursor, z.tuple([z.int(), z.string().max(16)]));
  const conditions: WhereOptions[] = [ownSites(actor)];
  if (after) {
    const [siteId, code] = after;
    conditions.push({
      [Op.or]: [{ siteId: { [Op.gt]: siteId } }, { siteId, code: { [Op.gt]: code } }],
    });
  }
  const rows = await ReadPoint.findAll({
    where: { [Op.and]: conditions },
    include:
      query.site === undefined
        ? []
        : [{ model: Site, as: 'site', attributes: [], where: { code: query.site } }],
    order,
    limit: query.limit + 1,
  });
  const page = pageFrom(rows, query.limit, (last) => [last.siteId, last.code]);
  return { ...(await withCodes(db, page.rows)), next: page.next };
}

/** The read point of a site by both codes, or null. */
export async function findReadPoint(
  db: Database,
  site: string,
  code: string,
): Promise<(ReadPointsWithCodes & { readPoint: ReadPoint }) | null> {
  const { ReadPoint, Site } = modelsOf(db.sequelize);
  const readPoint = await ReadPoint.findOne({
    where: { code },
    include: [{ model: Site, as: 'site', attributes: [], where: { code: site } }],
  });
  return readPoint && { readPoint, ...(await withCodes(db, [readPoint])) };
}

/** The read points of these sites and codes, in that order; unknown ones are left out. */
export async function findReadPoints(
  db: Database,
  keys: { site: string; code: string }[],
): Promise<ReadPointsWithCodes> {
  const { ReadPoint, Site } = modelsOf(db.sequelize);
  const found = await ReadPoint.findAll({
    where: { code: [...new Set(keys.map(({ code }) => code))] },
    include: [
      {
        model: Site,
        as: 'site',
        attributes: [],
        where: { code: [...new Set(keys.map(({ site }) => site))] },
      },
    ],
  });
  const { codes } = await withCodes(db, found);
  const byKey = new Map(found.map((row) => [`${codes.get(row.siteId)} ${row.code}`, row]));
  return { rows: keys.flatMap(({ site, code }) => byKey.get(`${site} ${code}`) ?? []), codes };
}

function ownSites(actor: Actor): WhereOptions {
  if (isAdministrator(actor)) return {};
  return { siteId: worksAtSites(actor) ? actor.siteIds : [] };
}

async function withCodes(db: Database, rows: ReadPoint[]): Promise<ReadPointsWithCodes> {
  const ids = rows.flatMap((row) => [row.siteId, row.decreasingSiteId, row.increasingSiteId]);
  return { rows, codes: await siteCodesById(db, ids) };
}
