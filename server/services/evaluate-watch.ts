import type { PoolConnection } from 'mariadb';
import { v4 as uuid } from 'uuid';
import type { ClearedBecause } from '../contract/alerts.js';
import type { WatchKind } from '../contract/watches.js';
import type { Context } from '../lib/context.js';
import { withTransaction } from '../lib/database.js';
import type { StoredScope } from '../models/watch.js';
import type { Actor } from '../policies/actor.js';
import { sql, type Sql } from '../queries/sql.js';
import { watchedUnits, type WatchRule, type WatchedUnits } from '../queries/watched-units.js';
import { queueMail } from './queue-mail.js';

/** How many alerts one evaluation of one watch raised, cleared and brought up to date. */
export interface Evaluation {
  raised: number;
  cleared: number;
  corrected: number;
}

interface WatchRow {
  kind: WatchKind;
  scope: StoredScope | string;
  addresses: string[] | string;
  include_on_hand: number;
  hours: number;
}

interface LastingRow {
  id: number;
  /** 1: the same silence or stay still goes on. */
  lasts: number;
  /** 1: the alert stands on facts that history now has otherwise. */
  differs: number;
  /** 1: there was a read after the facts (quiet), or the car still stands there (dwell). */
  sign: number;
}

/**
 * Clears and raises the alerts of one watch as of now, seen with the eyes of the person who set
 * it, and queues the mail about what it raised, all in one transaction. Running it twice changes
 * nothing the second time. A watch that has ended meanwhile is left alone.
 */
export function evaluateWatch(
  context: Context,
  watchId: number,
  actor: Actor,
): Promise<Evaluation> {
  return withTransaction(context.db.pool, async (connection) => {
    const now = context.clock.now();
    // Held to the end: changes to the watch, its end and other evaluations wait.
    const [row] = await run<WatchRow[]>(
      connection,
      sql`SELECT kind, scope, addresses, include_on_hand, hours FROM watches
          WHERE id = ${watchId} AND ended_at IS NULL FOR UPDATE`,
    );
    if (!row) return { raised: 0, cleared: 0, corrected: 0 };
    const rule = ruleOf(row);
    const units = watchedUnits(rule, actor, now);
    const lasting = await findLasting(connection, watchId, rule.kind, units, now);
    const cleared = await clear(connection, lasting, rule.kind, now);
    const corrected = await correct(connection, lasting, units);
    const noticeId = uuid();
    const raised = await raise(connection, { watchId, noticeId, now, rule, units });
    if (raised > 0) {
      const addresses = parsed(row.addresses);
      await queueMail(context, connection, { watchId, noticeId, addresses, now });
    }
    return { raised, cleared, corrected };
  });
}

function ruleOf(row: WatchRow): WatchRule {
  return {
    kind: row.kind,
    scope: parsed(row.scope),
    includeOnHand: row.include_on_hand === 1,
    hours: row.hours,
  };
}

/** JSON columns come parsed or as text, as the server tells the connector. */
function parsed<T>(value: T | string): T {
  return typeof value === 'string' ? (JSON.parse(value) as T) : value;
}

/** Alerts that have not cleared and of which something is to be done. Locks nothing. */
function findLasting(
  connection: PoolConnection,
  watchId: number,
  kind: WatchKind,
  { fromLasting, ofAlert, lasts, since, siteId, atLeast }: WatchedUnits,
  now: Date,
): Promise<LastingRow[]> {
  const sign =
    kind === 'quiet'
      ? sql`EXISTS (SELECT 1 FROM last_seen n WHERE n.unit_id = a.unit_id AND n.at > a.since_at)`
      : sql`EXISTS (SELECT 1 FROM stays n WHERE n.unit_id = a.unit_id AND n.site_id = a.site_id
              AND (n.departed_at IS NULL OR n.departure_final_at > ${now})
              AND n.first_seen_at <= a.raised_at)`;
  return run<LastingRow[]>(
    connection,
    sql`SELECT * FROM (
          SELECT a.id, ls.unit_id IS NOT NULL AS lasts, ${sign} AS sign,
            COALESCE(NOT (${siteId} <=> a.site_id AND ${since} = a.since_at
              AND (${atLeast}) = a.at_least), 0) AS differs
          FROM alerts a LEFT JOIN (${fromLasting}) ON ${ofAlert} AND ${lasts}
          WHERE a.watch_id = ${watchId} AND a.state IN ('open', 'acknowledged')
        ) verdict WHERE lasts = 0 OR differs = 1`,
  );
}

async function clear(
  connection: PoolConnection,
  lasting: LastingRow[],
  kind: WatchKind,
  now: Date,
): Promise<number> {
  const over = lasting.filter((row) => row.lasts === 0);
  const ordinary: ClearedBecause = kind === 'quiet' ? 'read' : 'left';
  // For dwell the sign says that the car still stands there, so something else has changed.
  const isOrdinary = (row: LastingRow) => (row.sign === 1) === (kind === 'quiet');
  for (const [because, rows] of [
    [ordinary, over.filter(isOrdinary)],
    ['changed', over.filter((row) => !isOrdinary(row))],
  ] as const) {
    if (rows.length === 0) continue;
    const ids = rows.map((row) => row.id);
    await run(
      connection,
      sql`UPDATE alerts SET state = 'cleared', cleared_at = ${now}, cleared_because = ${because}
          WHERE id IN (${ids}) AND state <> 'cleared'`,
    );
  }
  return over.length;
}

async function correct(
  connection: PoolConnection,
  lasting: LastingRow[],
  { fromLasting, ofAlert, lasts, siteId, since, atLeast }: WatchedUnits,
): Promise<number> {
  const ids = lasting.filter((row) => row.lasts === 1).map((row) => row.id);
  if (ids.length === 0) return 0;
  await run(
    connection,
    sql`UPDATE alerts a JOIN (${fromLasting}) ON ${ofAlert} AND ${lasts}
        SET a.site_id = ${siteId}, a.since_at = ${since}, a.at_least = ${atLeast}
        WHERE a.id IN (${ids})`,
  );
  return ids.length;
}

/** One alert a car, unless one still lasts; the key of the table guards it once more. */
async function raise(
  connection: PoolConnection,
  {
    watchId,
    noticeId,
    now,
    rule,
    units,
  }: { watchId: number; noticeId: string; now: Date; rule: WatchRule; units: WatchedUnits },
): Promise<number> {
  const { from, raises, siteId, since, atLeast } = units;
  const result = await run<{ affectedRows: number }>(
    connection,
    sql`INSERT INTO alerts
          (watch_id, unit_id, state, site_id, since_at, at_least, hours, notice_id, raised_at)
        SELECT ${watchId}, u.id, 'open', ${siteId}, ${since}, ${atLeast}, ${rule.hours}, ${noticeId}, ${now}
        FROM ${from}
        WHERE ${raises} AND NOT EXISTS
          (SELECT 1 FROM alerts a WHERE a.watch_id = ${watchId} AND a.unit_id = u.id AND a.lasting = 1)
        ORDER BY u.id`,
  );
  return result.affectedRows;
}

function run<T>(connection: PoolConnection, statement: Sql): Promise<T> {
  return connection.query<T>(statement.text, statement.values);
}
