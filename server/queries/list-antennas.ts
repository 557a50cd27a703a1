import { QueryTypes } from 'sequelize';
import { z } from 'zod';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';

/** An antenna with the codes of its site and read point. */
export interface AntennaRow {
  id: number;
  siteId: number;
  site: string;
  readPoint: string;
  number: number;
  offsetM: number;
  side: string;
}

const select = `
  SELECT antennas.id, antennas.site_id AS siteId, sites.code AS site,
         read_points.code AS readPoint, antennas.number,
         antennas.offset_m AS offsetM, antennas.side
    FROM antennas
    JOIN sites ON sites.id = antennas.site_id
    JOIN read_points ON read_points.id = antennas.read_point_id`;

/** Antennas site by site, by number; of one site when it is given. */
export async function listAntennas(
  db: Database,
  query: { limit: number; cursor?: string | undefined; site?: string | undefined },
) {
  const after = readCursor(query.cursor, z.tuple([z.int(), z.int()])) ?? [0, 0];
  const rows = await db.sequelize.query<AntennaRow>(
    `${select}
      WHERE antennas.site_id >= :siteId
        AND (antennas.site_id > :siteId OR antennas.number > :number)
        ${query.site === undefined ? '' : 'AND sites.code = :site'}
      ORDER BY antennas.site_id, antennas.number
      LIMIT :most`,
    {
      type: QueryTypes.SELECT,
      replacements: {
        siteId: after[0],
        number: after[1],
        site: query.site ?? null,
        most: query.limit + 1,
      },
    },
  );
  return pageFrom(rows, query.limit, (last) => [last.siteId, last.number]);
}

/** The antennas of these sites and numbers, in that order; unknown ones are left out. */
export async function findAntennas(
  db: Database,
  keys: { site: string; number: number }[],
): Promise<AntennaRow[]> {
  const rows = await db.sequelize.query<AntennaRow>(
    `${select} WHERE sites.code IN (:sites) AND antennas.number IN (:numbers)`,
    {
      type: QueryTypes.SELECT,
      replacements: {
        sites: [...new Set(keys.map(({ site }) => site))],
        numbers: [...new Set(keys.map(({ number }) => number))],
      },
    },
  );
  const byKey = new Map(rows.map((row) => [`${row.site} ${row.number}`, row]));
  return keys.flatMap(({ site, number }) => byKey.get(`${site} ${number}`) ?? []);
}
