import { LONGEST_STOP_MS } from '../domain/movements/configuration.js';
import { inParts } from '../lib/bulk.js';
import type { Runs } from '../lib/connection-of.js';
import { joinSql, sql } from '../queries/sql.js';
import type { Trackside } from './load-trackside.js';
import type { RebuildSpan } from './plan-rebuild.js';
import type { TracksideChange } from './trackside-changes.js';

export interface ChangeWithSpans {
  words: string;
  spans: RebuildSpan[];
}

type Stretch = Pick<RebuildSpan, 'since' | 'until'>;

/** The stretches of read points that the changes can alter; none where nothing was read. */
export async function spansOfChanges(
  connection: Runs,
  changes: readonly TracksideChange[],
  before: Trackside,
  after: Trackside,
): Promise<ChangeWithSpans[]> {
  const antennasOf = (pointId: number) =>
    [before, after].flatMap(({ antennas }) =>
      [...antennas].filter(([, row]) => row.read_point_id === pointId).map(([key]) => key),
    );
  const asked = changes.flatMap(({ whileRead, wholePointIds = [] }) => [
    ...(whileRead ? [whileRead.antenna] : []),
    ...wholePointIds.flatMap(antennasOf),
  ]);
  const read = await readStretches(connection, [...new Set(asked)]);
  const undirected = await undirectedSpans(connection, changes);
  return changes.map(({ words, whileRead, wholePointIds = [], undirectedPointIds = [] }) => ({
    words,
    spans: [
      ...(whileRead?.pointIds ?? []).flatMap((readPointId) =>
        spansFrom(readPointId, [read.get(whileRead?.antenna ?? '')]),
      ),
      ...wholePointIds.flatMap((readPointId) =>
        spansFrom(
          readPointId,
          antennasOf(readPointId).map((key) => read.get(key)),
        ),
      ),
      ...undirected.filter(
        ({ readPointId }) =>
          undirectedPointIds === 'all' || undirectedPointIds.includes(readPointId),
      ),
    ],
  }));
}

/** One span over all stretches, with a longest stop on either side; none of nothing. */
function spansFrom(
  readPointId: number,
  stretches: readonly (Stretch | undefined)[],
): RebuildSpan[] {
  const known = stretches.filter((stretch) => stretch !== undefined);
  if (known.length === 0) return [];
  const since = Math.min(...known.map((stretch) => stretch.since.getTime()));
  const until = Math.max(...known.map((stretch) => stretch.until.getTime()));
  return [padded({ readPointId, since: new Date(since), until: new Date(until) })];
}

/** A train that stopped over the reader may have begun, or ended, that much beyond the span. */
export function padded({ readPointId, since, until }: RebuildSpan): RebuildSpan {
  return {
    readPointId,
    since: new Date(since.getTime() - LONGEST_STOP_MS),
    until: new Date(until.getTime() + LONGEST_STOP_MS),
  };
}

interface StretchRow {
  antenna: string;
  since: Date | null;
  until: Date | null;
}

const ANTENNAS_A_STATEMENT = 100;

/** First and last read of each antenna (site id and number), by the ends of the ledger's key. */
async function readStretches(
  connection: Runs,
  antennas: readonly string[],
): Promise<Map<string, Stretch>> {
  const stretches = new Map<string, Stretch>();
  for (const part of inParts(antennas, ANTENNAS_A_STATEMENT)) {
    const selects = part.map((antenna) => {
      const [siteId, number] = antenna.split(' ').map(Number);
      return sql`(SELECT ${antenna} AS antenna, MIN(read_at) AS since, MAX(read_at) AS until
        FROM \`reads\` WHERE site_id = ${siteId} AND antenna_no = ${number})`;
    });
    const { text, values } = joinSql(selects, 'UNION');
    for (const row of await connection.query<StretchRow[]>(text, values)) {
      if (row.since && row.until) {
        stretches.set(row.antenna, { since: row.since, until: row.until });
      }
    }
  }
  return stretches;
}

/** From the first to the last pass of each read point whose own reads tell no direction. */
async function undirectedSpans(
  connection: Runs,
  changes: readonly TracksideChange[],
): Promise<RebuildSpan[]> {
  const asked = changes.flatMap(({ undirectedPointIds = [] }): (number | 'all')[] =>
    undirectedPointIds === 'all' ? ['all'] : undirectedPointIds,
  );
  if (asked.length === 0) return [];
  const ids = asked.filter((id) => id !== 'all');
  const at = asked.includes('all') ? sql`1 = 1` : sql`read_point_id IN (${ids})`;
  const { text, values } = sql`
    SELECT read_point_id, MIN(started_at) AS since, MAX(ended_at) AS until FROM passes
    WHERE (direction_basis IS NULL OR direction_basis = 'history') AND ${at}
    GROUP BY read_point_id`;
  const rows = await connection.query<(Stretch & { read_point_id: number })[]>(text, values);
  return rows.map(({ read_point_id: readPointId, since, until }) =>
    padded({ readPointId, since, until }),
  );
}
