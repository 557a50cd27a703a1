import type { PoolConnection } from 'mariadb';
import type { Network, ReadPointConfiguration } from '../domain/movements/configuration.js';
import { firstRead, lastReadAt } from '../domain/movements/evidence.js';
import { pointRules } from '../domain/movements/passages.js';
import { isUndirected, withHistory, type Pass } from '../domain/movements/passes.js';
import {
  reachOfChange,
  refoldPoint,
  withFresh,
  type PassStart,
  type Refolded,
} from '../domain/movements/refold-point.js';
import type { Visit } from '../domain/movements/visits.js';
import type { Changes } from './changes.js';
import { lengthenStanding } from './lengthen-standing.js';
import { visitsOfRow, type PassRow } from './passage-rows.js';
import { loadWheels, loadWindow, startOf, startOfWindow, type Window } from './point-window.js';
import { loadSurroundings, touchedSpans } from './surroundings.js';
import { writeRefolded } from './write-refolded.js';

/** New facts of one read point. */
export interface FreshFacts {
  visits: Visit[];
  /** Units whose visits they are, or may come out otherwise because of the next track. */
  unitIds: Set<number>;
  /** Earliest and latest instant that they can bear on, ms. */
  since: number;
  until: number;
  /** A wheel record is among them: any visit then may have another direction. */
  sensed: boolean;
  /** Stored visits that begin in it ([from, to), ms) give way to the new ones. */
  instead?: { from: number; to: number };
}

const MINUTE_MS = 60_000;
const FIRST_REACH_MS = 10 * MINUTE_MS;
const REACH_GROWTH = 8;

/** Folds new facts into a read point's passages and passes, and says what it changed. */
export async function foldPoint(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  given: FreshFacts,
  changes: Changes,
): Promise<void> {
  const facts = await lengthenStanding(connection, network, point, given, changes);
  if (facts.visits.length === 0 && given.visits.length > 0) return;
  const touched = await touchedSpans(connection, network, point, facts);
  const reach = reachOfChange({ point }, facts, touched);
  const from = await startOfWindow(connection, network, point, { ...facts, since: reach.since });
  for (let further = FIRST_REACH_MS; ; further *= REACH_GROWTH) {
    const window = await loadWindow(connection, point.id, from, reach.until + further);
    const refolded = await refold(connection, network, point, facts, window, reach.until);
    if (!refolded.settledAt && !window.complete) continue;
    const kept = keepDirections(refolded.passes, window.passes);
    await writeRefolded(connection, point.id, window, { ...refolded, passes: kept }, changes);
    return;
  }
}

async function refold(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  facts: FreshFacts,
  window: Window,
  changedUntil: number,
): Promise<Refolded> {
  const { instead } = facts;
  const stored = window.passages.filter((row) => {
    const firstAt = row.first_at.getTime();
    return !instead || firstAt < instead.from || firstAt >= instead.to;
  });
  const visits = withFresh(stored.flatMap(visitsOfRow), facts.visits, point.visitGapSeconds * 1000);
  const around = await loadSurroundings(connection, network, point, window, visits);
  const judged = [...visits, ...around.here].map(({ evidence }) => evidence);
  const since = Math.min(facts.since, ...judged.map((evidence) => firstRead(evidence).at));
  const until = Math.max(facts.until, ...judged.map(lastReadAt));
  const wheels = await loadWheels(connection, point.id, since, until);
  return refoldPoint(pointRules(network, point, wheels), {
    from: window.from,
    visits,
    around,
    changedUntil,
    starts: window.passes.map(startOf),
  });
}

/**
 * A pass without direction of its own keeps the one that history gave it until it is voted on
 * again, so that nothing is written twice.
 */
function keepDirections(passes: readonly Pass[], stored: readonly PassRow[]): Pass[] {
  const byHistory = new Map(
    stored
      .filter((row) => row.direction_basis === 'history')
      .map((row) => [startKey(startOf(row)), row.direction as 'increasing' | 'decreasing']),
  );
  return passes.map((pass) => {
    const direction = isUndirected(pass) && byHistory.get(startKey(pass));
    return direction ? withHistory(pass, direction) : pass;
  });
}

function startKey({ startedAt, ordinal }: Pick<PassStart, 'startedAt' | 'ordinal'>): string {
  return `${startedAt} ${ordinal}`;
}
