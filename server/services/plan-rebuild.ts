import type { UpsertResult } from 'mariadb';
import type { Transaction } from 'sequelize';
import { insertRows } from '../lib/bulk.js';
import { connectionOf, type Runs } from '../lib/connection-of.js';

/** A stretch of one read point's history that has to be made anew from the ledger. */
export interface RebuildSpan {
  readPointId: number;
  since: Date;
  until: Date;
}

export interface PlannedRebuild {
  cause: 'configuration' | 'command' | 'release';
  /** What a person calls it: "Antenna 3 at ALDER moved to +6 m". */
  label: string;
  /** The person who asked for it; null for a command. */
  requestedBy: number | null;
  spans: readonly RebuildSpan[];
}

const MOST_LABEL = 200;

/**
 * Queues a rebuild inside the caller's transaction, and answers its id; null when nothing is left
 * to rebuild. Spans of one read point that touch are made one, and what is frozen is cut off.
 */
export async function planRebuild(
  either: Transaction | Runs,
  { cause, label, requestedBy, spans }: PlannedRebuild,
): Promise<number | null> {
  const connection = connectionOf(either);
  const merged = mergeSpans(spans);
  if (merged.length === 0) return null;
  const open = cutFrozen(merged, await lockFrozenBefore(connection));
  if (open.length === 0) return null;
  const { insertId } = await connection.query<UpsertResult>(
    `INSERT INTO rebuilds (cause, label, requested_by, state, requested_at)
     VALUES (?, ?, ?, 'waiting', NOW(3))`,
    [cause, shortened(label), requestedBy],
  );
  const id = Number(insertId);
  await insertRows(
    connection,
    'rebuild_spans',
    ['rebuild_id', 'read_point_id', 'since_at', 'until_at', 'next_at'],
    open.map(({ readPointId, since, until }) => [id, readPointId, since, until, since]),
  );
  return id;
}

/** The same stretches without overlaps, read point by read point, oldest first. */
export function mergeSpans(spans: readonly RebuildSpan[]): RebuildSpan[] {
  const merged: RebuildSpan[] = [];
  const ordered = spans.toSorted(
    (a, b) => a.readPointId - b.readPointId || a.since.getTime() - b.since.getTime(),
  );
  for (const span of ordered) {
    const before = merged.at(-1);
    if (before?.readPointId !== span.readPointId || before.until < span.since) {
      merged.push({ ...span });
    } else if (span.until > before.until) {
      before.until = span.until;
    }
  }
  return merged;
}

/** Waits for a retention that is freezing just now, so that no span reaches behind it. */
async function lockFrozenBefore(connection: Runs): Promise<Date | null> {
  const [row] = await connection.query<{ frozen_before: Date | null }[]>(
    'SELECT frozen_before FROM config_state WHERE id = 1 FOR UPDATE',
  );
  return row?.frozen_before ?? null;
}

function cutFrozen(spans: readonly RebuildSpan[], frozenBefore: Date | null): RebuildSpan[] {
  if (!frozenBefore) return [...spans];
  return spans
    .filter(({ until }) => until > frozenBefore)
    .map((span) => (span.since < frozenBefore ? { ...span, since: frozenBefore } : span));
}

function shortened(label: string): string {
  return label.length <= MOST_LABEL ? label : `${label.slice(0, MOST_LABEL - 1)}…`;
}
