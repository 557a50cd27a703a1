import { Op } from 'sequelize';
import { z } from 'zod';
import type { RebuildListQuery } from '../contract/rebuilds.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { Rebuild } from '../models/rebuild.js';
import type { RebuildProgress, RebuildRecord } from '../presenters/rebuild.js';
import { ask, sql } from './sql.js';

const cursorSchema = z.object({ id: z.int() });

/** A page of rebuilds, newest first, with how far each has come. Three queries. */
export async function listRebuilds(
  db: Database,
  page: RebuildListQuery,
): Promise<{ rebuilds: RebuildRecord[]; next: string | null }> {
  const after = readCursor(page.cursor, cursorSchema);
  const found = await modelsOf(db.sequelize).Rebuild.findAll({
    where: {
      ...(page.state ? { state: page.state } : {}),
      ...(after ? { id: { [Op.lt]: after.id } } : {}),
    },
    order: [['id', 'DESC']],
    limit: page.limit + 1,
  });
  const { rows, next } = pageFrom(found, page.limit, ({ id }) => ({ id }));
  return { rebuilds: await withProgress(db, rows), next };
}

/** One rebuild with how far it has come; null when there is none. */
export async function findRebuild(db: Database, id: number): Promise<RebuildRecord | null> {
  const found = await modelsOf(db.sequelize).Rebuild.findByPk(id);
  const [record] = found ? await withProgress(db, [found]) : [];
  return record ?? null;
}

/** The rebuild that a command began last and that stands stopped; null when none does. */
export async function findStoppedCommand(db: Database): Promise<number | null> {
  const found = await modelsOf(db.sequelize).Rebuild.findOne({
    where: { cause: 'command', state: 'stopped' },
    order: [['id', 'DESC']],
  });
  return found?.id ?? null;
}

async function withProgress(db: Database, rebuilds: readonly Rebuild[]): Promise<RebuildRecord[]> {
  if (rebuilds.length === 0) return [];
  const [progress, people] = await Promise.all([
    rebuildProgress(
      db,
      rebuilds.map(({ id }) => id),
    ),
    modelsOf(db.sequelize).Person.findAll({
      attributes: ['id', 'name'],
      where: { id: rebuilds.flatMap(({ requestedBy }) => requestedBy ?? []) },
    }),
  ]);
  const names = new Map(people.map(({ id, name }) => [id, name] as const));
  return rebuilds.map((rebuild) => ({
    rebuild,
    progress: progress.get(rebuild.id) ?? null,
    requestedBy: rebuild.requestedBy === null ? null : (names.get(rebuild.requestedBy) ?? null),
  }));
}

interface ProgressRow {
  rebuild_id: number;
  whole: number;
  past: number;
  points: number;
  since: Date;
  until: Date;
}

/** How far rebuilds have come, by the time that their spans cover; one query. */
export async function rebuildProgress(
  db: Database,
  ids: readonly number[],
): Promise<Map<number, RebuildProgress>> {
  if (ids.length === 0) return new Map();
  const rows = await ask<ProgressRow>(
    db,
    sql`SELECT rebuild_id,
          SUM(TIMESTAMPDIFF(SECOND, since_at, until_at)) AS whole,
          SUM(TIMESTAMPDIFF(SECOND, since_at, IF(done, until_at, LEAST(next_at, until_at)))) AS past,
          COUNT(DISTINCT read_point_id) AS points,
          MIN(since_at) AS since, MAX(until_at) AS until
        FROM rebuild_spans WHERE rebuild_id IN (${ids}) GROUP BY rebuild_id`,
  );
  return new Map(
    rows.map(({ rebuild_id: id, whole, past, points, since, until }) => [
      id,
      {
        share: whole > 0 ? past / whole : 0,
        hours: whole / 3600,
        readPoints: points,
        since,
        until,
      },
    ]),
  );
}
