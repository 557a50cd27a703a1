import type { PoolConnection } from 'mariadb';
import type { Direction, Network } from '../domain/movements/configuration.js';
import {
  directionByHistory,
  mayVote,
  type Adjacent,
  type Voter,
} from '../domain/movements/direction-by-history.js';
import { unpackEvidence } from '../domain/movements/pack-evidence.js';
import type { PassageRole, PassKey } from '../domain/movements/passes.js';
import { byKeys } from '../lib/bulk.js';
import { passKeyOf, passOfRow, type Changes } from './changes.js';
import { neighboursOf, type NeighbourRow, type Neighbours } from './neighbours.js';
import type { PassageRow, PassRow } from './passage-rows.js';

/**
 * Votes again on the passes noted as undirected, in order of time. A direction that comes out
 * otherwise bears on later passes there, so it goes on from these until nothing changes.
 */
export async function settleDirections(
  connection: PoolConnection,
  network: Network,
  changes: Changes,
): Promise<void> {
  let waiting = [...changes.undirected.values()];
  while (waiting.length) {
    const ballots = await loadBallots(connection, network, waiting);
    const next = new Map<string, PassKey>();
    const decided = new Map<string, Direction | null>();
    const turned: Ballot[] = [];
    for (const ballot of ballots) {
      const direction = count(network, ballot, decided);
      decided.set(passKeyOf(ballot.key), direction);
      if (direction === ballot.direction) continue;
      turned.push(ballot);
      for (const key of laterPasses(ballot)) next.set(passKeyOf(key), key);
    }
    await write(connection, turned, decided, changes);
    // Those that were voted on in the same round have already heard of it.
    waiting = [...next].flatMap(([name, key]) => (decided.has(name) ? [] : [key]));
  }
}

interface Ballot {
  key: PassKey;
  direction: Direction | null;
  members: { row: PassageRow; neighbours: Neighbours }[];
}

const KEY = 'read_point_id = ? AND started_at = ? AND ordinal = ?';
const OF_PASS = 'read_point_id = ? AND pass_started_at = ? AND pass_ordinal = ?';

/** Passes without direction of their own among those of the keys, in order of time. */
async function loadBallots(
  connection: PoolConnection,
  network: Network,
  keys: readonly PassKey[],
): Promise<Ballot[]> {
  const passes = await byKeys<PassRow>(
    connection,
    `SELECT * FROM passes
     WHERE (direction_basis IS NULL OR direction_basis = 'history') AND (:keys)`,
    KEY,
    keys.map(keyValues),
  );
  passes.sort((a, b) => a.started_at.getTime() - b.started_at.getTime() || a.ordinal - b.ordinal);
  const ballots = passes.map((row): Ballot => {
    const startedAt = row.started_at.getTime();
    const key = { readPointId: row.read_point_id, startedAt, ordinal: row.ordinal };
    return { key, direction: known(row.direction), members: [] };
  });
  const rows = await byKeys<PassageRow>(
    connection,
    'SELECT * FROM passages WHERE :keys',
    OF_PASS,
    ballots.map(({ key }) => keyValues(key)),
  );
  const neighbours = await neighboursOf(connection, network, rows);
  const byKey = new Map(ballots.map((ballot) => [passKeyOf(ballot.key), ballot]));
  rows.forEach((row, index) => {
    const key = passOfRow(row);
    const ballot = key && byKey.get(passKeyOf(key));
    ballot?.members.push({ row, neighbours: neighbours[index] as Neighbours });
  });
  return ballots;
}

function count(
  network: Network,
  { key, members }: Ballot,
  decided: ReadonlyMap<string, Direction | null>,
): Direction | null {
  const severalOffsets = network.offsetsOf(key.readPointId) > 1;
  const electorate = members.filter(({ row }) => {
    const visits = severalOffsets ? unpackEvidence(row.evidence) : [];
    return mayVote({ ...spanOf(row), role: row.role as PassageRole, visits }, severalOffsets);
  });
  const voters = electorate.map(({ row, neighbours: { before, after } }): Voter => ({
    ...spanOf(row),
    before: before && adjacentOf(before, decided),
    after: after && adjacentOf(after, new Map()),
  }));
  return directionByHistory(network, key.readPointId, voters);
}

function spanOf(row: PassageRow) {
  return { firstAt: row.first_at.getTime(), lastAt: row.last_at.getTime() };
}

/** What was decided of its pass in this round stands above what is stored. */
function adjacentOf(row: NeighbourRow, decided: ReadonlyMap<string, Direction | null>): Adjacent {
  const key = passOfRow(row);
  const now = key && row.role !== 'returned' ? decided.get(passKeyOf(key)) : undefined;
  return {
    readPointId: row.read_point_id,
    firstAt: row.first_at.getTime(),
    lastAt: row.last_at.getTime(),
    direction: now === undefined ? known(row.direction) : now,
    basis: row.direction_basis as Adjacent['basis'],
  };
}

/** Passes at the same read point that know of this one by a unit of theirs. */
function laterPasses({ key, members }: Ballot): PassKey[] {
  return members.flatMap(({ neighbours: { after } }) =>
    after?.read_point_id === key.readPointId ? (passOfRow(after) ?? []) : [],
  );
}

async function write(
  connection: PoolConnection,
  turned: readonly Ballot[],
  decided: ReadonlyMap<string, Direction | null>,
  changes: Changes,
): Promise<void> {
  for (const direction of ['increasing', 'decreasing', null] as const) {
    const ballots = turned.filter(({ key }) => decided.get(passKeyOf(key)) === direction);
    const keys = ballots.map(({ key }) => keyValues(key));
    const [word, basis] = direction ? [`'${direction}'`, `'history'`] : [`'unknown'`, 'NULL'];
    await byKeys(
      connection,
      `UPDATE passes SET direction = ${word}, direction_basis = ${basis} WHERE :keys`,
      KEY,
      keys,
    );
    await byKeys(
      connection,
      `UPDATE passages SET direction = ${word}, direction_basis = ${basis},
         role = '${direction ? 'crossing' : 'presence'}'
       WHERE role <> 'returned' AND (:keys)`,
      OF_PASS,
      keys,
    );
    for (const { key, members } of ballots) {
      changes.pass(key);
      for (const { row, neighbours } of members) {
        if (row.role !== 'returned') changes.unit(row.unit_id, row.first_at.getTime());
        const next = neighbours.after && passOfRow(neighbours.after);
        if (next) changes.pass(next);
      }
    }
  }
}

function keyValues({ readPointId, startedAt, ordinal }: PassKey): [number, Date, number] {
  return [readPointId, new Date(startedAt), ordinal];
}

function known(direction: string): Direction | null {
  return direction === 'unknown' ? null : (direction as Direction);
}
