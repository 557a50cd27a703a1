import { readdirSync } from 'node:fs';
import { createRequire } from 'node:module';
import path from 'node:path';
import type { QueryInterface } from 'sequelize';
import type { Database } from '../../server/lib/database.js';
import type { Found } from './demo-history.js';

interface Seeder {
  up(queryInterface: QueryInterface): Promise<void>;
  down(queryInterface: QueryInterface): Promise<void>;
}

const directory = path.resolve(import.meta.dirname, '../../seeders');
const load = createRequire(import.meta.url);

/** The demo's seeders in their order. */
export function demoSeeders(): Seeder[] {
  return readdirSync(directory)
    .filter((name) => name.endsWith('.cjs'))
    .sort()
    .map((name) => load(path.join(directory, name)) as Seeder);
}

/** Seeds the invented region, as sequelize-cli does. */
export async function seedDemo(db: Database): Promise<void> {
  const queryInterface = db.sequelize.getQueryInterface();
  for (const seeder of demoSeeders()) await seeder.up(queryInterface);
}

/** What the projector wrote, to compare with the truth. */
export async function foundInDatabase({ pool }: Database): Promise<Found> {
  const passages = await pool.query<
    { point: string; unit: string; at: Date; direction: string; role: string }[]
  >(
    `SELECT CONCAT(s.code, ' ', r.code) AS point, u.unit_key AS unit, p.first_at AS at, p.direction,
         p.role
       FROM passages p JOIN read_points r ON r.id = p.read_point_id
       JOIN sites s ON s.id = r.site_id JOIN units u ON u.id = p.unit_id`,
  );
  const stays = await pool.query<
    { site: string; unit: string; arrived_at: Date | null; departed_at: Date | null }[]
  >(
    `SELECT s.code AS site, u.unit_key AS unit, arrived_at, departed_at
       FROM stays y JOIN sites s ON s.id = y.site_id JOIN units u ON u.id = y.unit_id`,
  );
  return {
    passages: passages.map(({ point, unit, at, direction, role }) => ({
      point,
      unit,
      at: at.getTime(),
      direction: direction === 'increasing' || direction === 'decreasing' ? direction : null,
      isCrossing: role === 'crossing',
    })),
    stays: stays.map(({ site, unit, arrived_at, departed_at }) => ({
      site,
      unit,
      arrivedAt: arrived_at?.getTime() ?? null,
      departedAt: departed_at?.getTime() ?? null,
    })),
  };
}
