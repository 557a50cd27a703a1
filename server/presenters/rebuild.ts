import type { RebuildView } from '../contract/rebuilds.js';
import type { Rebuild } from '../models/rebuild.js';

/** How far a rebuild has come, from 0 to 1, and what it covers. */
export interface RebuildProgress {
  share: number;
  /** Of the ledger, each read point's for itself. */
  hours: number;
  readPoints: number;
  since: Date;
  until: Date;
}

export interface RebuildRecord {
  rebuild: Rebuild;
  /** Null when retention has taken all that it covered. */
  progress: RebuildProgress | null;
  /** The name of the person; null for a command, and for somebody who has gone. */
  requestedBy: string | null;
}

/** A rebuild as the contract has it. */
export function presentRebuild(
  { rebuild, progress, requestedBy }: RebuildRecord,
  can: RebuildView['can'],
): RebuildView {
  return {
    id: rebuild.id,
    label: rebuild.label,
    cause: rebuild.cause,
    state: rebuild.state,
    doneShare: rebuild.state === 'done' ? 1 : (progress?.share ?? 0),
    readPoints: progress?.readPoints ?? 0,
    since: progress?.since.toISOString() ?? null,
    until: progress?.until.toISOString() ?? null,
    requestedBy: requestedBy === null ? null : { name: requestedBy },
    requestedAt: rebuild.requestedAt.toISOString(),
    finishedAt: rebuild.finishedAt?.toISOString() ?? null,
    can,
  };
}
