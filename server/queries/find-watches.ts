import { z } from 'zod';
import type { Database } from '../lib/database.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import { modelsOf } from '../models/index.js';
import type { Watch } from '../models/watch.js';
import { isAdministrator, type Actor } from '../policies/actor.js';
import type { WatchRecord } from '../presenters/watch.js';
import { ask, sql, type Sql } from './sql.js';
import { unitNames } from './unit-names.js';

const cursorSchema = z.object({ id: z.int() });

/** True for rows of `watches w` that the person set or is told by; ended ones too. */
export function watchesOf(actor: Actor): Sql {
  if (isAdministrator(actor)) return sql`TRUE`;
  return sql`(w.person_id = ${actor.personId} OR w.id IN
    (SELECT wp.watch_id FROM watch_people wp WHERE wp.person_id = ${actor.personId}))`;
}

/** A page of the watches that the person set or is told by, newest first. Seven queries. */
export async function listWatches(
  db: Database,
  actor: Actor,
  page: { limit: number; cursor?: string | undefined },
  now: Date,
): Promise<{ watches: WatchRecord[]; next: string | null }> {
  const after = readCursor(page.cursor, cursorSchema);
  const found = await ask<{ id: number }>(
    db,
    sql`SELECT w.id FROM watches w
        WHERE w.ended_at IS NULL AND ${watchesOf(actor)} AND ${after ? sql`w.id < ${after.id}` : sql`TRUE`}
        ORDER BY w.id DESC LIMIT ${page.limit + 1}`,
  );
  const { rows, next } = pageFrom(found, page.limit, ({ id }) => ({ id }));
  const watches = await loadWatches(
    db,
    rows.map((row) => row.id),
    now,
  );
  return { watches, next };
}

/** One watch that has not ended; null when there is none. Whoever asks checks the rights. */
export async function findWatch(db: Database, id: number, now: Date): Promise<WatchRecord | null> {
  const [watch] = await loadWatches(db, [id], now);
  return watch ?? null;
}

/** How many watches a person has set that have not ended. */
export function countWatches(db: Database, personId: number): Promise<number> {
  return modelsOf(db.sequelize).Watch.count({ where: { personId, endedAt: null } });
}

async function loadWatches(db: Database, ids: number[], now: Date): Promise<WatchRecord[]> {
  if (ids.length === 0) return [];
  const { Watch, WatchPerson } = modelsOf(db.sequelize);
  const [watches, told, openAlerts] = await Promise.all([
    Watch.findAll({ where: { id: ids, endedAt: null }, order: [['id', 'DESC']] }),
    WatchPerson.findAll({ where: { watchId: ids }, order: ['watchId', 'personId'] }),
    countOpenAlerts(db, ids),
  ]);
  const names = await namesFor(
    db,
    watches,
    told.map((row) => row.personId),
    now,
  );
  return watches.map((watch) => ({
    ...watch.get({ plain: true }),
    evaluatedAt: watch.evaluatedAt ?? null,
    peopleIds: told.filter((row) => row.watchId === watch.id).map((row) => row.personId),
    openAlerts: openAlerts.get(watch.id) ?? 0,
    names,
  }));
}

async function countOpenAlerts(db: Database, watchIds: number[]): Promise<Map<number, number>> {
  const rows = await ask<{ watch_id: number; open_alerts: number }>(
    db,
    sql`SELECT watch_id, COUNT(*) AS open_alerts FROM alerts
        WHERE watch_id IN (${watchIds}) AND state = 'open' GROUP BY watch_id`,
  );
  return new Map(rows.map((row) => [row.watch_id, row.open_alerts] as const));
}

async function namesFor(
  db: Database,
  watches: Watch[],
  toldIds: number[],
  now: Date,
): Promise<WatchRecord['names']> {
  const { Organisation, Person, Site } = modelsOf(db.sequelize);
  const idsOf = (part: 'unitIds' | 'ownerIds' | 'siteIds') =>
    watches.flatMap((watch) => watch.scope[part] ?? []);
  const [people, units, owners, sites] = await Promise.all([
    Person.findAll({
      where: { id: [...toldIds, ...watches.map((watch) => watch.personId)] },
      attributes: ['id', 'name'],
    }),
    unitNames(db, idsOf('unitIds'), now),
    Organisation.findAll({ where: { id: idsOf('ownerIds') }, attributes: ['id', 'name'] }),
    Site.findAll({ where: { id: idsOf('siteIds') }, attributes: ['id', 'code', 'name'] }),
  ]);
  return {
    people: new Map(people.map(({ id, name }) => [id, name] as const)),
    units,
    owners: new Map(owners.map(({ id, name }) => [id, name] as const)),
    sites: new Map(sites.map(({ id, code, name }) => [id, { code, name }] as const)),
  };
}
