import type { WatchKind } from '../contract/watches.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { Actor } from '../policies/actor.js';
import { alertsInSight } from './narrow-alerts.js';
import { ask, sql } from './sql.js';
import { unitNames } from './unit-names.js';
import { watchedUnits } from './watched-units.js';

const MOST_LINES = 50;

export interface NoticeLine {
  name: { unitId: string; display: string };
  kind: string;
  siteName: string | null;
  /** How it was last known. */
  basis: string;
  since: Date;
  atLeast: boolean;
}

/** What is left of a notice when its mail is about to go. */
export interface Notice {
  watch: { name: string; kind: WatchKind; hours: number };
  raisedAt: Date;
  /** Alerts still open whose cars are too long and in the recipient's sight now. */
  total: number;
  /** The longest first, at most fifty. */
  lines: NoticeLine[];
  /** Of those left out: cars whose departure is still provisional. */
  waiting: number;
  acknowledged: number;
  cleared: number;
  outOfSight: number;
}

interface CountRow {
  raised_at: Date | null;
  total: number | null;
  waiting: number | null;
  acknowledged: number | null;
  cleared: number | null;
  out_of_sight: number | null;
}

interface LineRow {
  unit_id: number;
  kind: string;
  site_name: string | null;
  basis: string | null;
  since_at: Date;
  at_least: number;
}

/**
 * Reads again what a notice is about, with the watch as it is now: the alerts raised together,
 * seen with the eyes of the person who set the watch and of the `recipient`. Null when the watch
 * has ended. Four queries.
 */
export async function loadNotice(
  db: Database,
  { noticeId, watchId, now }: { noticeId: string; watchId: number; now: Date },
  owner: Actor,
  recipient: Actor,
): Promise<Notice | null> {
  const watch = await modelsOf(db.sequelize).Watch.findOne({
    where: { id: watchId, endedAt: null },
  });
  if (!watch) return null;
  const { fromLasting, ofAlert, raises, lasts, siteId, since, atLeast } = watchedUnits(
    watch,
    owner,
    now,
  );
  const inSight = alertsInSight(recipient);
  const [[counts], rows] = await Promise.all([
    ask<CountRow>(
      db,
      sql`SELECT MIN(raised_at) AS raised_at,
            CAST(SUM(is_open AND in_sight AND raises) AS INT) AS total,
            CAST(SUM(is_open AND in_sight AND lasts AND NOT raises) AS INT) AS waiting,
            CAST(SUM(state = 'acknowledged') AS INT) AS acknowledged,
            CAST(SUM(state = 'cleared' OR (is_open AND NOT lasts)) AS INT) AS cleared,
            CAST(SUM(is_open AND lasts AND NOT in_sight) AS INT) AS out_of_sight
          FROM (
            SELECT a.state, a.raised_at, a.state = 'open' AS is_open, ${inSight} AS in_sight,
              ls.unit_id IS NOT NULL AS lasts, COALESCE(${raises}, 0) AS raises
            FROM alerts a LEFT JOIN (${fromLasting}) ON ${ofAlert} AND ${lasts}
            WHERE a.notice_id = ${noticeId}
          ) verdict`,
    ),
    ask<LineRow>(
      db,
      sql`SELECT a.unit_id, u.kind, p.name AS site_name, ls.basis, ${since} AS since_at, ${atLeast} AS at_least
          FROM alerts a JOIN (${fromLasting}) ON ${ofAlert}
            LEFT JOIN sites p ON p.id = ${siteId}
          WHERE a.notice_id = ${noticeId} AND a.state = 'open' AND ${inSight} AND ${raises}
          ORDER BY since_at, a.id LIMIT ${MOST_LINES}`,
    ),
  ]);
  return {
    watch: { name: watch.name, kind: watch.kind, hours: watch.hours },
    raisedAt: counts?.raised_at ?? now,
    lines: await linesFrom(db, rows, now),
    total: counts?.total ?? 0,
    waiting: counts?.waiting ?? 0,
    acknowledged: counts?.acknowledged ?? 0,
    cleared: counts?.cleared ?? 0,
    outOfSight: counts?.out_of_sight ?? 0,
  };
}

async function linesFrom(db: Database, rows: LineRow[], now: Date): Promise<NoticeLine[]> {
  const names = await unitNames(
    db,
    rows.map((row) => row.unit_id),
    now,
  );
  return rows.map((row) => ({
    name: names.get(row.unit_id) ?? { unitId: '', display: 'a car without a number' },
    kind: row.kind,
    siteName: row.site_name,
    basis: row.basis ?? 'read',
    since: row.since_at,
    atLeast: row.at_least === 1,
  }));
}
