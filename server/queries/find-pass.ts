import { PASS_ID } from '../contract/passes.js';
import type { PassKey } from '../presenters/pass-id.js';
import type { PassRecord, PassUnitRecord } from '../presenters/pass.js';
import type { Database } from '../lib/database.js';
import type { Actor } from '../policies/actor.js';
import { unitSourcesOf, type UnitSource } from './narrow-units.js';
import { ask, sql } from './sql.js';

/** A pass with the site that decides who sees all of it. */
export interface FoundPass extends PassRecord {
  site_id: number;
  read_point_id: number;
}

/** The pass of an id, or null. */
export async function findPass(db: Database, id: string): Promise<FoundPass | null> {
  const key = keyOf(id);
  if (!key) return null;
  const [row] = await ask<FoundPass>(
    db,
    sql`SELECT p.*, rp.site_id, s.code AS site_code, s.name AS site_name,
        rp.code AS read_point_code, rp.name AS read_point_name
      FROM passes p JOIN read_points rp ON rp.id = p.read_point_id
        JOIN sites s ON s.id = rp.site_id
      WHERE s.code = ${key.siteCode} AND rp.code = ${key.readPointCode}
        AND p.started_at = ${key.startedAt} AND p.ordinal = ${key.ordinal}`,
  );
  return row ?? null;
}

/**
 * Where the pass of a former id has gone: to the one that its first unit went by in at that time.
 * Null when there never was one, or its reads name no train any more.
 */
export async function findSuccessor(db: Database, id: string): Promise<PassKey | null> {
  const key = keyOf(id);
  if (!key) return null;
  const [row] = await ask<{ pass_started_at: Date; pass_ordinal: number }>(
    db,
    sql`SELECT p.pass_started_at, p.pass_ordinal
      FROM pass_aliases a JOIN read_points rp ON rp.id = a.read_point_id
        JOIN sites s ON s.id = rp.site_id
        JOIN passages p ON p.unit_id = a.unit_id AND p.read_point_id = a.read_point_id
          AND p.first_at <= a.started_at AND p.last_at >= a.started_at AND p.stray IS NULL
      WHERE s.code = ${key.siteCode} AND rp.code = ${key.readPointCode}
        AND a.started_at = ${key.startedAt} AND a.ordinal = ${key.ordinal}
      ORDER BY p.first_at DESC LIMIT 1`,
  );
  return row ? { ...key, startedAt: row.pass_started_at, ordinal: row.pass_ordinal } : null;
}

/** The units of a pass in order of their first reads, each once. */
export async function listPassUnits(db: Database, pass: FoundPass): Promise<PassUnitRecord[]> {
  return ask<PassUnitRecord>(
    db,
    sql`SELECT p.unit_id, u.kind FROM passages p JOIN units u ON u.id = p.unit_id
      WHERE p.read_point_id = ${pass.read_point_id} AND p.pass_started_at = ${pass.started_at}
        AND p.pass_ordinal = ${pass.ordinal}
      ORDER BY p.first_at, p.first_antenna, p.first_tag`,
  );
}

/**
 * Which of a pass's units the person may name: all where they work, else those of their
 * organisation. Null: all of them.
 */
export async function namedUnits(
  db: Database,
  actor: Actor,
  pass: FoundPass,
  unitIds: readonly number[],
): Promise<Set<number> | null> {
  const sources = unitSourcesOf(actor);
  if (sources.some((source) => seesSite(source, pass.site_id))) return null;
  const organisations = sources.flatMap((source) =>
    source.table === 'visible_units' ? [source.organisationId] : [],
  );
  if (organisations.length === 0 || unitIds.length === 0) return new Set();
  const rows = await ask<{ unit_id: number }>(
    db,
    sql`SELECT unit_id FROM visible_units
      WHERE org_id IN (${organisations}) AND unit_id IN (${unitIds})`,
  );
  return new Set(rows.map((row) => row.unit_id));
}

function seesSite(source: UnitSource, siteId: number): boolean {
  if (source.table === 'visible_units') return false;
  return source.siteIds === null || source.siteIds.includes(siteId);
}

function keyOf(id: string): PassKey | null {
  const [, siteCode, readPointCode, time, ordinal] = PASS_ID.exec(id) ?? [];
  if (!siteCode || !readPointCode || !time) return null;
  const startedAt = new Date(Number.parseInt(time, 36));
  return { siteCode, readPointCode, startedAt, ordinal: Number(ordinal ?? 0) };
}
