import type { PoolConnection } from 'mariadb';
import type { Network, ReadPointConfiguration } from '../domain/movements/configuration.js';
import { firstRead, lastReadAt } from '../domain/movements/evidence.js';
import type { Span } from '../domain/movements/refold-point.js';
import {
  ALONE_MS,
  BESIDE_MS,
  onlyGroup,
  PARALLEL_MS,
  type Surroundings,
} from '../domain/movements/strays.js';
import type { Visit } from '../domain/movements/visits.js';
import type { FreshFacts } from './fold-point.js';
import { visitsOfRow, type PassageRow } from './passage-rows.js';
import type { Window } from './point-window.js';

/** Strays are told apart only where two antennas or a parallel track let them. */
export function canHaveStrays(network: Network, point: ReadPointConfiguration): boolean {
  if (point.kind === 'spot') return false;
  return network.antennaCountOf(point.id) > 1 || network.parallelTo(point.id).length > 0;
}

/** Stored visits of the units, near enough to be judged anew when these get new reads. */
export async function touchedSpans(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  facts: Pick<FreshFacts, 'since' | 'until' | 'unitIds' | 'sensed'>,
): Promise<Span[]> {
  if (!canHaveStrays(network, point)) return [];
  const { since, until } = facts;
  const unitIds = await touchedUnits(connection, point, facts);
  if (unitIds.length === 0) return [];
  const load = async (from: number, to: number): Promise<Span[]> => {
    const rows = await connection.query<Pick<PassageRow, 'first_at' | 'last_at'>[]>(
      `SELECT first_at, last_at FROM passages FORCE INDEX (passages_last)
       WHERE read_point_id = ? AND last_at >= ? AND first_at <= ? AND unit_id IN (?)`,
      [point.id, new Date(from), new Date(to), unitIds],
    );
    return rows.map((row) => ({
      firstAt: row.first_at.getTime(),
      lastAt: row.last_at.getTime(),
    }));
  };
  // A read may lengthen a stored visit: whatever is near that one is near the read.
  const gapMs = point.visitGapSeconds * 1000;
  const near = await load(since - BESIDE_MS, until + BESIDE_MS);
  const joined = near.filter(
    ({ firstAt, lastAt }) => lastAt >= since - gapMs && firstAt <= until + gapMs,
  );
  const first = Math.min(since, ...joined.map(({ firstAt }) => firstAt));
  const last = Math.max(until, ...joined.map(({ lastAt }) => lastAt));
  const isWider = first < since || last > until;
  return isWider ? load(first - BESIDE_MS, last + BESIDE_MS) : near;
}

/** A wheel record bears on every visit that it covers. */
async function touchedUnits(
  connection: PoolConnection,
  point: ReadPointConfiguration,
  { since, until, unitIds, sensed }: Pick<FreshFacts, 'since' | 'until' | 'unitIds' | 'sensed'>,
): Promise<number[]> {
  if (!sensed) return [...unitIds];
  const rows = await connection.query<{ unit_id: number }[]>(
    `SELECT DISTINCT unit_id FROM passages FORCE INDEX (passages_last)
     WHERE read_point_id = ? AND last_at >= ? AND first_at <= ?`,
    [point.id, new Date(since), new Date(until)],
  );
  return [...new Set([...unitIds, ...rows.map((row) => row.unit_id)])];
}

/** What else of this read point and of those beside it bears on the strays of a stretch. */
export async function loadSurroundings(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  window: Window,
  visits: readonly Visit[],
): Promise<Surroundings> {
  const none: Surroundings = { here: [], parallel: [] };
  if (visits.length === 0 || !canHaveStrays(network, point)) return none;
  const beside = network.parallelTo(point.id).map(({ id }) => id);
  const [first, last] = spanOf(visits);
  const parallel = beside.length
    ? await connection.query<PassageRow[]>(
        `SELECT * FROM passages WHERE read_point_id IN (?) AND last_at >= ? AND first_at <= ?
           AND unit_id IN (?)`,
        [
          beside,
          new Date(first - PARALLEL_MS),
          new Date(last + PARALLEL_MS),
          [...new Set(visits.map(({ unit }) => unit))],
        ],
      )
    : [];
  return {
    here: await visitsAround(connection, network, point, window, visits),
    parallel: parallel.flatMap(visitsOfRow),
  };
}

/** Visits next to the stretch, of units that may stand beside the track and of any close by. */
async function visitsAround(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  { from, until }: Window,
  visits: readonly Visit[],
): Promise<Visit[]> {
  if (network.antennaCountOf(point.id) < 2) return [];
  const start = from?.startedAt ?? 0;
  const suspects = visits.filter(
    ({ evidence }) =>
      (firstRead(evidence).at <= start + BESIDE_MS || lastReadAt(evidence) >= until - BESIDE_MS) &&
      onlyGroup(evidence) !== null,
  );
  if (suspects.length === 0) return [];
  const unitIds = [...new Set(suspects.map(({ unit }) => unit))];
  const rows = await connection.query<PassageRow[]>(
    `SELECT * FROM passages WHERE read_point_id = ? AND (stray IS NULL OR stray <> 'parallel')
       AND last_at >= ? AND first_at <= ? AND (first_at < ? OR first_at > ?)
       AND (unit_id IN (?) OR last_at >= ? AND first_at <= ?)`,
    [
      point.id,
      new Date(Math.max(start - BESIDE_MS, 0)),
      new Date(until + BESIDE_MS),
      new Date(start),
      new Date(until),
      unitIds,
      new Date(Math.max(start - ALONE_MS, 0)),
      new Date(until + ALONE_MS),
    ],
  );
  return rows.flatMap(visitsOfRow);
}

function spanOf(visits: readonly Visit[]): [number, number] {
  return [
    Math.min(...visits.map(({ evidence }) => firstRead(evidence).at)),
    Math.max(...visits.map(({ evidence }) => lastReadAt(evidence))),
  ];
}
