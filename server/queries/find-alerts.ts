import { z } from 'zod';
import type { AlertState, ClearedBecause } from '../contract/alerts.js';
import type { WatchKind } from '../contract/watches.js';
import { parseUnit } from '../domain/identifiers/parse-unit.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { Actor } from '../policies/actor.js';
import type { AlertRecord } from '../presenters/alert.js';
import { alertsOf } from './narrow-alerts.js';
import { ask, joinSql, sql, type Sql } from './sql.js';
import { unitNames, unitsByIdentity } from './unit-names.js';

const cursorSchema = z.object({ at: z.coerce.date(), id: z.int() });

export interface AlertFilter {
  state: AlertState;
  watch?: number | undefined;
  /** What a person would write for one car. */
  unit?: string | undefined;
  limit: number;
  cursor?: string | undefined;
}

interface AlertRow {
  id: number;
  state: AlertState;
  watch_id: number;
  watch_name: string;
  watch_kind: WatchKind;
  watch_person_id: number;
  unit_id: number;
  unit_kind: string;
  car_type: string | null;
  site_code: string | null;
  site_name: string | null;
  since_at: Date;
  at_least: number;
  hours: number;
  raised_at: Date;
  acknowledged_at: Date | null;
  acknowledged_by: number | null;
  acknowledged_name: string | null;
  cleared_at: Date | null;
  cleared_because: ClearedBecause | null;
}

/**
 * A page of the alerts in one state that are this person's business, latest raised first, and
 * how many there are of them in all. At most five queries.
 */
export async function listAlerts(
  db: Database,
  actor: Actor,
  filter: AlertFilter,
  now: Date,
): Promise<{ alerts: AlertRecord[]; next: string | null; count: number }> {
  const after = readCursor(filter.cursor, cursorSchema);
  const conditions = await conditionsOf(db, actor, filter, now);
  const page = after
    ? sql`a.raised_at <= ${after.at} AND (a.raised_at < ${after.at} OR a.id < ${after.id})`
    : sql`TRUE`;
  const [found, [counted]] = await Promise.all([
    ask<AlertRow>(
      db,
      sql`${selectAlerts} WHERE ${conditions} AND ${page}
          ORDER BY a.raised_at DESC, a.id DESC LIMIT ${filter.limit + 1}`,
    ),
    ask<{ count: number }>(
      db,
      sql`SELECT COUNT(*) AS count FROM alerts a JOIN watches w ON w.id = a.watch_id
          WHERE ${conditions}`,
    ),
  ]);
  const { rows, next } = pageFrom(found, filter.limit, (row) => ({
    at: row.raised_at,
    id: row.id,
  }));
  return { alerts: await complete(db, rows, now), next, count: counted?.count ?? 0 };
}

/** One alert that is this person's business; else null. */
export async function findAlert(
  db: Database,
  actor: Actor,
  id: number,
  now: Date,
): Promise<AlertRecord | null> {
  const rows = await ask<AlertRow>(
    db,
    sql`${selectAlerts} WHERE a.id = ${id} AND ${alertsOf(actor)}`,
  );
  const [alert] = await complete(db, rows, now);
  return alert ?? null;
}

const selectAlerts = sql`
  SELECT a.id, a.state, a.watch_id, w.name AS watch_name, w.kind AS watch_kind,
    w.person_id AS watch_person_id, a.unit_id, u.kind AS unit_kind, u.car_type,
    p.code AS site_code, p.name AS site_name, a.since_at, a.at_least, a.hours, a.raised_at,
    a.acknowledged_at, a.acknowledged_by, k.name AS acknowledged_name,
    a.cleared_at, a.cleared_because
  FROM alerts a
  JOIN watches w ON w.id = a.watch_id
  JOIN units u ON u.id = a.unit_id
  LEFT JOIN sites p ON p.id = a.site_id
  LEFT JOIN people k ON k.id = a.acknowledged_by`;

async function conditionsOf(
  db: Database,
  actor: Actor,
  filter: AlertFilter,
  now: Date,
): Promise<Sql> {
  const unitId = filter.unit === undefined ? null : await unitIdOf(db, filter.unit, now);
  return joinSql(
    [
      sql`a.state = ${filter.state}`,
      ...(filter.watch === undefined ? [] : [sql`a.watch_id = ${filter.watch}`]),
      // Of a car that nobody knows there are no alerts.
      ...(unitId === null ? [] : [sql`a.unit_id = ${unitId}`]),
      alertsOf(actor),
    ],
    'AND',
  );
}

async function unitIdOf(db: Database, text: string, now: Date): Promise<number> {
  const parsed = parseUnit(text);
  if (parsed.kind !== 'unit') return 0;
  const { compact } = parsed.identity;
  return (await unitsByIdentity(db, [compact], now)).get(compact) ?? 0;
}

async function complete(db: Database, rows: AlertRow[], now: Date): Promise<AlertRecord[]> {
  if (rows.length === 0) return [];
  const { WatchPerson } = modelsOf(db.sequelize);
  const [names, told] = await Promise.all([
    unitNames(
      db,
      rows.map((row) => row.unit_id),
      now,
    ),
    WatchPerson.findAll({ where: { watchId: [...new Set(rows.map((row) => row.watch_id))] } }),
  ]);
  return rows.map((row) => ({
    id: row.id,
    state: row.state,
    watch: {
      id: row.watch_id,
      name: row.watch_name,
      kind: row.watch_kind,
      personId: row.watch_person_id,
      peopleIds: told.filter((one) => one.watchId === row.watch_id).map((one) => one.personId),
    },
    unit: { name: names.get(row.unit_id) ?? null, kind: row.unit_kind, carType: row.car_type },
    site: row.site_code === null ? null : { code: row.site_code, name: row.site_name ?? '' },
    sinceAt: row.since_at,
    atLeast: row.at_least === 1,
    hours: row.hours,
    raisedAt: row.raised_at,
    acknowledgedAt: row.acknowledged_at,
    acknowledgedBy:
      row.acknowledged_by === null
        ? null
        : { id: row.acknowledged_by, name: row.acknowledged_name ?? '' },
    clearedAt: row.cleared_at,
    clearedBecause: row.cleared_because,
  }));
}
