import type { PoolConnection } from 'mariadb';
import type { Network } from '../domain/movements/configuration.js';
import type { Fact, Report, Sighting } from '../domain/movements/sighting.js';
import { inOrder } from '../domain/movements/unit-facts.js';
import { byKeys } from '../lib/bulk.js';
import type { UnitStart } from './fold-units.js';
import { comparePlaced } from './neighbours.js';
import type { PassageRow } from './passage-rows.js';

/** What a fold takes of a stored passage. */
export type SightingRow = Pick<
  PassageRow,
  | 'unit_id'
  | 'read_point_id'
  | 'first_at'
  | 'first_antenna'
  | 'first_tag'
  | 'last_at'
  | 'direction'
  | 'pass_started_at'
  | 'pass_ordinal'
  | 'tag_count'
> & { role: Sighting['role'] };

/** The sightings and reports of units from where their folds begin, in order. */
export async function loadFacts(
  connection: PoolConnection,
  network: Network,
  starts: readonly UnitStart[],
): Promise<Map<number, Fact[]>> {
  const rows = await byKeys<SightingRow>(
    connection,
    `SELECT unit_id, read_point_id, first_at, first_antenna, first_tag, last_at, role, direction,
       pass_started_at, pass_ordinal, tag_count
     FROM passages FORCE INDEX (passages_unit) WHERE stray IS NULL AND (:keys)`,
    'unit_id = ? AND first_at >= ?',
    starts.map(({ unitId, beforeAt }) => [unitId, new Date(beforeAt)]),
  );
  rows.sort((a, b) => comparePlaced(network, a, b));
  const sightings = new Map<number, Sighting[]>();
  for (const row of rows) {
    const own = sightings.get(row.unit_id);
    if (own) own.push(sightingOf(row));
    else sightings.set(row.unit_id, [sightingOf(row)]);
  }
  const reports = await loadReports(connection, network, starts);
  return new Map(
    starts.map(({ unitId }) => {
      const [seen, said] = [sightings.get(unitId) ?? [], reports.get(unitId) ?? []];
      return [unitId, inOrder(network, seen, said)];
    }),
  );
}

function sightingOf(row: SightingRow): Sighting {
  return {
    readPointId: row.read_point_id,
    firstAt: row.first_at.getTime(),
    lastAt: row.last_at.getTime(),
    role: row.role,
    direction: row.direction === 'unknown' ? null : (row.direction as Sighting['direction']),
    pass: {
      readPointId: row.read_point_id,
      startedAt: row.pass_started_at?.getTime() ?? 0,
      ordinal: row.pass_ordinal ?? 0,
    },
    tagCount: row.tag_count,
  };
}

interface ReportRow {
  unit_compact: string;
  at: Date;
  event: Report['event'];
  basis: Report['basis'];
  site_id: number;
  track: string | null;
}

const REPORTS = `SELECT unit_compact, at, event, 'report' AS basis, site_id, NULL AS track
  FROM movement_reports WHERE :keys`;
const SEEN_BY_HAND = `SELECT unit_compact, at, IF(seen, 'seen', 'notThere') AS event,
    'hand' AS basis, site_id, track
  FROM hand_reports
  WHERE NOT EXISTS (SELECT 1 FROM hand_retractions r WHERE r.report_id = hand_reports.id)
    AND (:keys)`;

/** What was reported of whatever identities the units had at the time. */
async function loadReports(
  connection: PoolConnection,
  network: Network,
  starts: readonly UnitStart[],
): Promise<Map<number, Report[]>> {
  const reports = new Map<number, Report[]>();
  const [any] = await connection.query<{ said: number; seen: number }[]>(
    `SELECT EXISTS (SELECT 1 FROM movement_reports) AS said,
       EXISTS (SELECT 1 FROM hand_reports) AS seen`,
  );
  if (!any?.said && !any?.seen) return reports;
  const identities = await connection.query<{ unit_id: number; compact: string }[]>(
    'SELECT unit_id, compact FROM identities WHERE unit_id IN (?)',
    [starts.map(({ unitId }) => unitId)],
  );
  const since = new Map(starts.map(({ unitId, beforeAt }) => [unitId, new Date(beforeAt)]));
  const keys = identities.map((row) => [row.compact, since.get(row.unit_id) as Date]);
  const condition = 'unit_compact = ? AND at >= ?';
  const rows = [
    ...(await byKeys<ReportRow>(connection, REPORTS, condition, keys)),
    ...(await byKeys<ReportRow>(connection, SEEN_BY_HAND, condition, keys)),
  ];
  for (const row of rows) {
    const at = row.at.getTime();
    const unitId = network.unitOfIdentity(row.unit_compact, at);
    const from = typeof unitId === 'number' ? since.get(unitId) : undefined;
    if (typeof unitId !== 'number' || !from || at < from.getTime()) continue;
    const report: Report = {
      event: row.event,
      basis: row.basis,
      siteId: row.site_id,
      track: row.track,
      firstAt: at,
      lastAt: at,
    };
    const own = reports.get(unitId);
    if (own) own.push(report);
    else reports.set(unitId, [report]);
  }
  return reports;
}
