import type { PoolConnection } from 'mariadb';
import type { Network, ReadPointConfiguration } from '../domain/movements/configuration.js';
import { firstRead, groupsOf, lastReadAt, type Evidence } from '../domain/movements/evidence.js';
import { packEvidence } from '../domain/movements/pack-evidence.js';
import { describePassage, pointRules, type Passage } from '../domain/movements/passages.js';
import { STANDING_MS } from '../domain/movements/passes.js';
import { ALONE_MS } from '../domain/movements/strays.js';
import { mergeVisits, type Visit } from '../domain/movements/visits.js';
import type { Changes } from './changes.js';
import type { FreshFacts } from './fold-point.js';
import { visitsOfRow, type PassageRow } from './passage-rows.js';
import { loadWheels } from './point-window.js';

/**
 * A car that stands in the beam is read again and again, and only its own passage grows: that is
 * written here, so that not all that went by since it came is folded anew each time. Answers the
 * facts that are left to fold.
 */
export async function lengthenStanding(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  facts: FreshFacts,
  changes: Changes,
): Promise<FreshFacts> {
  if (facts.sensed || facts.instead || facts.visits.length === 0) return facts;
  if (network.parallelTo(point.id).length) return facts;
  const done = new Set<Visit>();
  for (const row of await standingRows(connection, point, facts)) {
    const [visit, ...others] = facts.visits.filter(({ unit }) => unit === row.unit_id);
    if (!visit || others.length) continue;
    const longer = await lengthen(connection, network, point, row, visit);
    if (!longer) continue;
    await write(connection, row, longer);
    changes.passage(row);
    done.add(visit);
  }
  if (done.size === 0) return facts;
  const visits = facts.visits.filter((visit) => !done.has(visit));
  return {
    ...facts,
    visits,
    unitIds: new Set(visits.map(({ unit }) => unit as number)),
    since: Math.min(...visits.map(({ evidence }) => firstRead(evidence).at)),
    until: Math.max(...visits.map(({ evidence }) => lastReadAt(evidence))),
  };
}

/** Passages of the units that have lasted longer than any train takes, and tell no direction. */
async function standingRows(
  connection: PoolConnection,
  point: ReadPointConfiguration,
  { since, until, unitIds }: FreshFacts,
): Promise<PassageRow[]> {
  const gapMs = point.visitGapSeconds * 1000;
  const rows = await connection.query<PassageRow[]>(
    `SELECT * FROM passages FORCE INDEX (passages_last)
     WHERE read_point_id = ? AND last_at >= ? AND first_at <= ? AND unit_id IN (?)
       AND stray IS NULL AND (direction_basis IS NULL OR direction_basis = 'history')`,
    [point.id, new Date(since - gapMs), new Date(until), [...unitIds]],
  );
  return rows.filter((row) => row.last_at.getTime() - row.first_at.getTime() > STANDING_MS);
}

/** The passage with the new visit in it; null where more than its end may come out otherwise. */
async function lengthen(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  row: PassageRow,
  fresh: Visit,
): Promise<Passage | null> {
  const stored = visitsOfRow(row);
  const last = stored.at(-1) as Visit;
  const begins = firstRead(fresh.evidence).at;
  if (begins < firstRead(last.evidence).at) return null;
  const [merged, ...apart] = mergeVisits([last, fresh], point.visitGapSeconds * 1000);
  if (!merged || apart.length || (await isSeenLater(connection, point, row))) return null;
  const until = Math.max(row.last_at.getTime(), lastReadAt(fresh.evidence));
  const wheels = await loadWheels(connection, point.id, row.first_at.getTime(), until);
  const rules = pointRules(network, point, wheels);
  const evidences = stored.map(({ evidence }) => evidence);
  const before = describePassage(rules, row.unit_id, evidences);
  const after = describePassage(rules, row.unit_id, [...evidences.slice(0, -1), merged.evidence]);
  if (!stands(before) || !stands(after) || before.own.sensed !== after.own.sensed) return null;
  return heard(before.visits) === heard(after.visits) ? after : null;
}

function stands({ own }: Passage): boolean {
  return own.direction === null && !own.returned && own.speedKmh === null;
}

/** Which tags at which antennas, as text. */
function heard(visits: readonly Evidence[]): string {
  const keys = visits.flatMap(groupsOf).map(({ antenna, tag }) => `${antenna} ${tag}`);
  return [...new Set(keys)].sort().join('\n');
}

/**
 * It has been here again since, or a car stands alone beside the track that would not be alone any
 * more: then the whole stretch must be looked at.
 */
async function isSeenLater(
  connection: PoolConnection,
  point: ReadPointConfiguration,
  row: PassageRow,
): Promise<boolean> {
  const [later] = await connection.query<unknown[]>(
    `SELECT 1 FROM passages FORCE INDEX (passages_unit)
     WHERE unit_id = ? AND first_at > ? AND read_point_id = ? LIMIT 1`,
    [row.unit_id, row.first_at, point.id],
  );
  if (later) return true;
  const [beside] = await connection.query<unknown[]>(
    `SELECT 1 FROM passages FORCE INDEX (passages_last)
     WHERE read_point_id = ? AND last_at >= ? AND stray = 'beside' LIMIT 1`,
    [point.id, new Date(row.last_at.getTime() - ALONE_MS)],
  );
  return beside !== undefined;
}

async function write(
  connection: PoolConnection,
  row: PassageRow,
  { lastAt, readCount, tagCount, visits }: Passage,
): Promise<void> {
  await connection.query(
    `UPDATE passages SET last_at = ?, read_count = ?, tag_count = ?, evidence = ?
     WHERE read_point_id = ? AND first_at = ? AND unit_id = ?`,
    [
      new Date(lastAt),
      readCount,
      tagCount,
      packEvidence(visits),
      row.read_point_id,
      row.first_at,
      row.unit_id,
    ],
  );
}
