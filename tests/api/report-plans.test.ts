import { expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { insertRows } from '../../server/lib/bulk.js';
import type { Site } from '../../server/models/site.js';
import { buildContext } from '../support/context.js';
import { countStatements } from '../support/count-statements.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { placeUnit } from '../support/histories.js';
import { rowsTouched, sortsOf } from '../support/look-at-plan.js';

const db = useTestDatabase();
const NOW = new Date('2026-03-10T12:00:00.000Z');
const COUNT = 20_000;
/** Rows that a page of 50 may touch, with joins. */
const FEW = 500;

/** As many reports by eye as messages, of a thousand cars, a minute apart, all of one site. */
async function fill(site: Site): Promise<void> {
  const { id: organisationId } = await buildOrganisation(db);
  const at = (index: number) => new Date(NOW.getTime() - index * 60_000);
  const car = (index: number) => `QTKX${index % 1_000}`;
  const indexes = Array.from({ length: COUNT }, (_, index) => index);
  const connection = await db.pool.getConnection();
  await insertRows(
    connection,
    'hand_reports',
    ['id', 'site_id', 'unit_compact', 'at', 'seen', 'reported_by', 'received_at'],
    indexes.map((index) => {
      const id = `00000000-0000-4000-8000-${String(index).padStart(12, '0')}`;
      return [id, site.id, car(index), at(index), true, 1, NOW];
    }),
  );
  await insertRows(
    connection,
    'movement_reports',
    [
      'organisation_id',
      'source',
      'reference',
      'unit_compact',
      'event',
      'at',
      'site_id',
      'received_at',
    ],
    indexes.map((index) => {
      const fact = ['desk', `r${index}`, car(index), 'placed', at(index), site.id, NOW];
      return [organisationId, ...fact];
    }),
  );
  await connection.query('ANALYZE TABLE hand_reports, movement_reports');
  await connection.release();
}

test('pages of reports touch few rows, of a site and of a car, the first and the next', async () => {
  const site = await buildSite(db, { code: 'ALDER' });
  await fill(site);
  const unit = await buildUnit(db, { identity: aarIdentity('QTKX', 7) });
  await placeUnit(db, unit, { state: 'onHand', at: NOW, site });
  const { context, statements } = countStatements(buildContext(db));
  const agent = await signIn(createApp(context, { clientDirectory: null }), await buildPerson(db));
  const connection = await db.pool.getConnection();
  const page = async (path: string, query: string) => {
    statements.take();
    const { body } = await agent.get(`${path}?${query}`).expect(200);
    const asked = statements.take().filter(({ text }) => /_reports/.test(text));
    expect(asked.length, path).toBeGreaterThan(0);
    for (const statement of asked) {
      expect(await rowsTouched(connection, statement), statement.text).toBeLessThan(FEW);
      if (path.includes('/sites/')) expect(await sortsOf(connection, statement)).toEqual([]);
    }
    return body as { data: unknown[]; next: string | null };
  };
  for (const [path, query, rows] of [
    ['/api/sites/ALDER/hand-reports', 'limit=50', 50],
    ['/api/sites/ALDER/hand-reports', 'unit=QTKX7&limit=10', 10],
    ['/api/equipment/QTKX7/reports', 'limit=15', 15],
  ] as const) {
    const first = await page(path, query);
    expect(first.data).toHaveLength(rows);
    const second = await page(path, `${query}&cursor=${first.next}`);
    expect(second.data).toHaveLength(rows);
  }
  await connection.release();
});
