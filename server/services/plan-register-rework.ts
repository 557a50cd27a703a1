import type { Transaction } from 'sequelize';
import { connectionOf, type Runs } from '../lib/connection-of.js';
import { byKeys } from '../lib/bulk.js';
import { planConfigurationRebuild } from './change-configuration.js';
import { markUnitsDirty } from './mark-units-dirty.js';
import type { NamingChange } from './naming-change.js';
import type { RebuildSpan } from './plan-rebuild.js';
import { padded } from './spans-of-changes.js';
import { spansOfNamings } from './spans-of-namings.js';

/** What the register says of a unit that its history hangs on. */
export interface RegisteredKind {
  unitId: number;
  kind: string;
  registered: boolean;
}

export interface RegisterRework {
  /** What a person calls the change. */
  words: string;
  requestedBy: number | null;
  names: readonly NamingChange[];
  /** Units that stood before, as they were and as they are. */
  units?: { before: readonly RegisteredKind[]; after: readonly RegisteredKind[] };
}

/** Kinds by which the end of one train is told from the beginning of the next. */
const PARTS_TRAINS = new Set(['locomotive', 'endOfTrain']);

/**
 * Plans what a change of the register makes anew, in the transaction of the change and after it:
 * one rebuild, and units to be folded again. Plans nothing when no read means anything else.
 */
export async function planRegisterRework(
  transaction: Transaction,
  { words, requestedBy, names, units = { before: [], after: [] } }: RegisterRework,
): Promise<void> {
  const connection = connectionOf(transaction);
  const changed = changedUnits(units.before, units.after);
  await markUnitsDirty(
    transaction,
    changed.map(({ is }) => is.unitId),
  );
  const parting = changed.filter(({ was, is }) =>
    [was, is].some(({ kind }) => PARTS_TRAINS.has(kind)),
  );
  const spans = [
    ...(await spansOfNamings(connection, names)),
    ...(await spansOfUnits(
      connection,
      parting.map(({ is }) => is.unitId),
    )),
  ];
  await planConfigurationRebuild(transaction, requestedBy, [{ words, spans }]);
}

/** "QTKX 40127", or "QTKX 40127 and 3 more" of several, in words for a rebuild. */
export const namesOf = (displays: readonly string[]): string =>
  displays.length > 1 ? `${displays[0]} and ${displays.length - 1} more` : (displays[0] ?? '');

function changedUnits(before: readonly RegisteredKind[], after: readonly RegisteredKind[]) {
  const byId = new Map(before.map((unit) => [unit.unitId, unit]));
  return after.flatMap((is) => {
    const was = byId.get(is.unitId);
    return was && (was.kind !== is.kind || was.registered !== is.registered) ? [{ was, is }] : [];
  });
}

async function spansOfUnits(connection: Runs, unitIds: readonly number[]): Promise<RebuildSpan[]> {
  const rows = await byKeys<{ read_point_id: number; first_at: Date; last_at: Date }>(
    connection,
    'SELECT read_point_id, first_at, last_at FROM passages WHERE :keys',
    'unit_id = ?',
    unitIds.map((unitId) => [unitId]),
  );
  return rows.map((row) =>
    padded({ readPointId: row.read_point_id, since: row.first_at, until: row.last_at }),
  );
}
