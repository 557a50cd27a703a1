import type { PoolConnection } from 'mariadb';
import type { Network } from '../domain/movements/configuration.js';
import { PARALLEL_MS } from '../domain/movements/strays.js';
import type { Changes } from './changes.js';
import { together } from './facts-by-point.js';
import { foldPoint, type FreshFacts } from './fold-point.js';
import { lookAround } from './look-around.js';
import { markCompanions } from './mark-companions.js';
import { settleDirections } from './settle-directions.js';

/** Folds new facts of read points, and everything that they bear on at other read points. */
export async function foldPoints(
  connection: PoolConnection,
  network: Network,
  facts: ReadonlyMap<number, readonly FreshFacts[]>,
  changes: Changes,
): Promise<void> {
  await foldEach(connection, network, facts, changes);
  // What was heard here may be stronger than what was heard on the next track, or weaker.
  await foldEach(connection, network, besides(network, facts), changes);
  await lookAround(connection, network, changes);
  await settleDirections(connection, network, changes);
  await markCompanions(connection, changes);
}

async function foldEach(
  connection: PoolConnection,
  network: Network,
  facts: ReadonlyMap<number, readonly FreshFacts[]>,
  changes: Changes,
): Promise<void> {
  for (const [readPointId, ofPoint] of [...facts].sort(([a], [b]) => a - b)) {
    for (const one of ofPoint) {
      await foldPoint(connection, network, network.readPoint(readPointId), one, changes);
    }
  }
}

/** The same units and times, without visits, for the parallel read points. */
function besides(
  network: Network,
  facts: ReadonlyMap<number, readonly FreshFacts[]>,
): Map<number, FreshFacts[]> {
  const beside = new Map<number, FreshFacts[]>();
  for (const [readPointId, ofPoint] of facts) {
    for (const { id } of network.parallelTo(readPointId)) {
      const echoes = ofPoint.map(({ unitIds, since, until }) => {
        return {
          visits: [],
          unitIds,
          since: since - PARALLEL_MS,
          until: until + PARALLEL_MS,
          sensed: false,
        };
      });
      beside.set(id, together([...(beside.get(id) ?? []), ...echoes]));
    }
  }
  return beside;
}
