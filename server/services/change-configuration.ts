import type { Transaction } from 'sequelize';
import { connectionOf } from '../lib/connection-of.js';
import type { Database } from '../lib/database.js';
import { inTransaction } from '../lib/in-transaction.js';
import { bumpConfigVersion } from './bump-config-version.js';
import { loadTrackside } from './load-trackside.js';
import { markUnitsDirty } from './mark-units-dirty.js';
import { planRebuild, type RebuildSpan } from './plan-rebuild.js';
import { spansOfChanges } from './spans-of-changes.js';
import { tracksideChanges } from './trackside-changes.js';

/**
 * Runs `act`, which changes sites, read points, antennas or routes, in a transaction that also
 * plans what has to be made anew: one rebuild, and units to be folded again. When nothing that
 * history hangs on has changed nothing is planned.
 */
export async function changeConfiguration<T>(
  db: Database,
  requestedBy: number | null,
  act: (transaction: Transaction) => Promise<T>,
): Promise<T> {
  return inTransaction(db.sequelize, async (transaction) => {
    await bumpConfigVersion(transaction);
    const before = await loadTrackside(transaction);
    const result = await act(transaction);
    const after = await loadTrackside(transaction);
    const changes = tracksideChanges(before, after);
    for (const { units } of changes) if (units) await markUnitsDirty(transaction, units);
    const found = await spansOfChanges(connectionOf(transaction), changes, before, after);
    await planConfigurationRebuild(transaction, requestedBy, found);
    return result;
  });
}

/** One rebuild for all that one request changed; changes without spans are not told. */
export async function planConfigurationRebuild(
  transaction: Transaction,
  requestedBy: number | null,
  changes: readonly { words: string; spans: readonly RebuildSpan[] }[],
): Promise<void> {
  const [first, ...more] = changes.filter(({ spans }) => spans.length > 0);
  if (!first) return;
  await planRebuild(transaction, {
    cause: 'configuration',
    label: more.length === 0 ? first.words : `${first.words}, and ${more.length} more`,
    requestedBy,
    spans: [first, ...more].flatMap(({ spans }) => spans),
  });
}
