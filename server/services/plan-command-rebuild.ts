import { withTransaction, type Database } from '../lib/database.js';
import type { Runs } from '../lib/connection-of.js';
import { joinSql, sql } from '../queries/sql.js';
import { markUnitsDirty, unitsEverAt, unitsEverSeen } from './mark-units-dirty.js';
import { planRebuild, type RebuildSpan } from './plan-rebuild.js';
import { padded } from './spans-of-changes.js';

/** What somebody at a terminal wants made anew; what is left out is all of it. */
export interface RebuildSelection {
  label: string;
  siteId: number | null;
  unitId: number | null;
  from: Date | null;
  until: Date | null;
}

/** Queues it, and has the units concerned folded again; null when there is nothing to make anew. */
export async function planCommandRebuild(
  db: Database,
  selection: RebuildSelection,
): Promise<number | null> {
  return withTransaction(db.pool, async (connection) => {
    const { label, siteId, unitId } = selection;
    const found = unitId === null ? await spansOfLedger(connection, selection) : [];
    const carried = unitId === null ? [] : await spansOfUnit(connection, unitId);
    const spans = [...found, ...carried].flatMap((span) => clipped(span, selection));
    // Of a part only those units are folded again whose passages turn out otherwise.
    if (!selection.from && !selection.until) {
      const concerned = siteId === null ? unitsEverSeen() : unitsEverAt(siteId);
      await markUnitsDirty(connection, unitId === null ? concerned : [unitId]);
    }
    return planRebuild(connection, { cause: 'command', label, requestedBy: null, spans });
  });
}

interface SpanRow {
  read_point_id: number;
  since: Date | null;
  until: Date | null;
}

/** From the first to the last read of each read point, or passage where its reads have gone. */
async function spansOfLedger(
  connection: Runs,
  { siteId }: RebuildSelection,
): Promise<RebuildSpan[]> {
  const antennas = await connection.query<
    { site_id: number; number: number; read_point_id: number }[]
  >('SELECT site_id, number, read_point_id FROM antennas WHERE ? IS NULL OR site_id = ?', [
    siteId,
    siteId,
  ]);
  const selects = antennas.map(
    ({ site_id: site, number, read_point_id: point }) =>
      sql`(SELECT ${point} AS read_point_id, MIN(read_at) AS since, MAX(read_at) AS until
        FROM \`reads\` WHERE site_id = ${site} AND antenna_no = ${number})`,
  );
  const passages = sql`(SELECT p.read_point_id, MIN(p.first_at) AS since, MAX(p.last_at) AS until
    FROM passages p JOIN read_points rp ON rp.id = p.read_point_id
    WHERE ${siteId} IS NULL OR rp.site_id = ${siteId} GROUP BY p.read_point_id)`;
  const { text, values } = joinSql([...selects, passages], 'UNION');
  return spansOf(await connection.query<SpanRow[]>(text, values));
}

/** Around everything the unit went by, and around reads of its tags that were set aside. */
async function spansOfUnit(connection: Runs, unitId: number): Promise<RebuildSpan[]> {
  const { text, values } = sql`
    SELECT read_point_id, first_at AS since, last_at AS until FROM passages
    WHERE unit_id = ${unitId}
    UNION SELECT a.read_point_id, h.read_at, h.read_at FROM tags t
      JOIN held h ON h.tag = t.value
      JOIN \`reads\` r ON r.batch_id = h.batch_id AND r.seq = h.seq AND r.read_at = h.read_at
      JOIN antennas a ON a.site_id = r.site_id AND a.number = r.antenna_no
    WHERE t.unit_id = ${unitId}`;
  return spansOf(await connection.query<SpanRow[]>(text, values));
}

function spansOf(rows: readonly SpanRow[]): RebuildSpan[] {
  return rows.flatMap(({ read_point_id: readPointId, since, until }) =>
    since && until ? [padded({ readPointId, since, until })] : [],
  );
}

/** The part of it that was asked for; a train at its edge is made anew as a whole. */
function clipped(span: RebuildSpan, { from, until }: RebuildSelection): RebuildSpan[] {
  const since = from && from > span.since ? from : span.since;
  const end = until && until < span.until ? until : span.until;
  return since < end ? [{ ...span, since, until: end }] : [];
}
